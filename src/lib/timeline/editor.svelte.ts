/** The editor as the page holds it: the state, running commands on it, saving what changes, and the live figures. */
import { clockTime } from '../text/figures';
import type { Trace } from '../formats/recording';
import { commandNamed, type CommandName } from './commands';
import { browserEditStore } from './edit-store';
import { FigureMemory, liveFigures, type WearableFigures } from './figures';
import { alignmentContent, changesBetween, setChanged, tagContent } from './history';
import type { SessionDocument, SessionState } from './model';
import { SaveQueue, saveStatusInWords, type Content, type EditStore, type SaveStatus, type Stopped, type Subject } from './saving';
import { actOnSession, fetchDocument, sendEdit, type Fetch, type Outcome, type SessionAct } from './session-requests';
import { openState, withDocument, type EditorState } from './state';
import { EMPTY_HISTORY, type Change, type EditedParts } from './step';
import { applyTransaction, beginGesture, endGesture, gestureBase, type Command } from './transaction';

export interface EditorOptions {
	fetch?: Fetch;
	/** Where edits are kept while they are not acknowledged; default this browser's own store. */
	store?: EditStore;
	now?: () => number;
	later?: (call: () => void, afterMs: number) => () => void;
}

const laterByTimer = (call: () => void, afterMs: number): (() => void) => {
	const timer = setTimeout(call, afterMs);
	return () => clearTimeout(timer);
};

/** The local time of this machine, as the head line says when something was saved. */
const localClock = (atMs: number): string => clockTime(atMs / 1000, 0, -new Date(atMs).getTimezoneOffset() * 60);

export class TimelineEditor {
	state: EditorState = $state.raw() as EditorState;
	/** How saving stands. */
	saveState: SaveStatus = $state.raw({ kind: 'saved', atMs: null });
	/** Edits that stopped because a colleague's version, or the server, stands against them: `settle` decides. */
	stopped: Stopped[] = $state.raw([]);
	/** An act on the whole session is on its way. */
	busy = $state(false);

	readonly figures: WearableFigures[] = $derived.by(() => liveFigures(this.state, this.memory));
	readonly saveStatus: string = $derived(saveStatusInWords(this.saveState, localClock));
	/** Name of the act that undo would take back; null when there is none. */
	readonly undoLabel: string | null = $derived(this.state.history.done.at(-1)?.name ?? null);
	readonly redoLabel: string | null = $derived(this.state.history.undone.at(-1)?.name ?? null);
	readonly undoCount: number = $derived(this.state.history.done.length);

	private readonly memory = new FigureMemory();
	private readonly queue: SaveQueue;
	private readonly fetch: Fetch;
	private readonly now: () => number;
	private gestureName: string | null = null;

	constructor(document: SessionDocument, traces: ReadonlyMap<string, Trace[]>, options: EditorOptions = {}) {
		this.now = options.now ?? Date.now;
		this.fetch = options.fetch ?? ((input, init) => fetch(input, init));
		this.state = openState(document, traces);
		this.queue = new SaveQueue({
			send: (edit) => sendEdit(this.fetch, document.sessionId, edit),
			store: options.store ?? browserEditStore(document.sessionId, document.me.initials, crypto.getRandomValues(new Uint32Array(2)).join('-')),
			now: this.now,
			later: options.later ?? laterByTimer,
			onChange: () => this.showSaving(),
			onSaved: (subject, version, state) => this.noteSaved(subject, version, state)
		});
		this.rememberVersions(document);
		this.takeBackUp(this.queue.recover());
		this.showSaving();
	}

	/**
	 * Runs a command, by name or as such. What it changes is saved at once.
	 * @returns whether it acted; when not, `state.said` says why
	 */
	run(command: CommandName | Command): boolean {
		const act = typeof command === 'string' ? commandNamed(command) : command;
		if (!act) return false;
		const before = this.state;
		const done = act(before, (transaction) => (this.state = applyTransaction(this.state, transaction, this.now())));
		if (!this.state.history.gesture) this.save(before);
		return done;
	}

	/** Could this command act now? Changes nothing. */
	could(command: CommandName | Command): boolean {
		const act = typeof command === 'string' ? commandNamed(command) : command;
		return act?.(this.state) ?? false;
	}

	/** Begins a drag. Everything until `end` is one step; nothing is sent meanwhile. */
	begin(): void {
		this.state = beginGesture(this.state);
		this.gestureName = null;
	}

	/** One move of a drag, counted from where the drag began. */
	move(command: Command): boolean {
		let next = gestureBase(this.state);
		let acted = false;
		command(next, (transaction) => {
			acted = Object.keys(transaction.patch).length > 0;
			this.gestureName = transaction.step?.name ?? this.gestureName;
			next = applyTransaction(next, acted ? { ...transaction, say: null } : { ...transaction, say: null, patch: {} }, this.now());
		});
		this.state = next;
		return acted;
	}

	/** Ends a drag: keeps it as one step, or puts everything back. */
	end(keep: boolean): void {
		const { gesture } = this.state.history;
		if (!gesture) return;
		this.state = endGesture(this.state, keep ? (this.gestureName ?? 'move') : null, this.now());
		if (keep) this.save(gesture);
	}

	/** Says a sentence to the user. */
	say(text: string): void {
		this.state = applyTransaction(this.state, { patch: {}, step: null, say: text }, this.now());
	}

	/** Decides about a stopped edit: mine on top of theirs (theirs stays in the record), or theirs instead of mine. */
	async settle(subject: Subject, choice: 'mine' | 'theirs'): Promise<void> {
		const stopped = this.stopped.find((s) => s.subject === subject);
		if (!stopped) return;
		if (choice === 'theirs' && stopped.theirs) this.state = { ...this.state, ...setChanged(this.state, [changeTo(subject, stopped.theirs.content)], 'after') };
		this.queue.settle(subject, choice);
		if (choice === 'theirs' && !stopped.theirs) await this.reload();
	}

	/** Edits that the server has not acknowledged; leaving the page now would need them kept. */
	get unsaved(): number {
		return this.queue.unsaved;
	}

	/** Hands the session to review. */
	handIn(note: string): Promise<Outcome> {
		return this.act('submit', { note });
	}
	/** Vouches for the session, or hands it back with a comment. */
	decide(decision: 'approved' | 'returned', comment: string): Promise<Outcome> {
		return this.act('decision', { decision, comment });
	}
	takeBack(): Promise<Outcome> {
		return this.act('take-back', {});
	}
	reopen(reason: string): Promise<Outcome> {
		return this.act('reopen', { reason });
	}

	/** Fetches the session again; what has not been acknowledged stays as it is here. */
	async reload(): Promise<Outcome> {
		const outcome = await fetchDocument(this.fetch, this.state.document.sessionId);
		if (outcome.ok) this.takeDocument(outcome.document);
		else this.say(outcome.sentence);
		return outcome;
	}

	/** Sends what was left from before a reload and listens for the connection. Call it once on the page; the result ends it. */
	attach(): () => void {
		const retry = () => this.queue.retryNow();
		const leaving = (event: BeforeUnloadEvent) => {
			// What waits is in the browser's store; only where that store failed would leaving lose it.
			if (this.queue.unsaved > 0 && !this.queue.storeWorks) event.preventDefault();
		};
		window.addEventListener('online', retry);
		window.addEventListener('focus', retry);
		window.addEventListener('beforeunload', leaving);
		this.queue.resume();
		return () => {
			window.removeEventListener('online', retry);
			window.removeEventListener('focus', retry);
			window.removeEventListener('beforeunload', leaving);
		};
	}

	private async act(act: SessionAct, body: Record<string, unknown>): Promise<Outcome> {
		if (this.queue.unsaved > 0) {
			const sentence = `${saveStatusInWords(this.saveState, localClock)}: wait until everything is saved, then try again.`;
			this.say(sentence);
			return { ok: false, sentence };
		}
		this.busy = true;
		try {
			const outcome = await actOnSession(this.fetch, this.state.document.sessionId, act, body);
			if (outcome.ok) {
				this.takeDocument(outcome.document);
				this.state = { ...this.state, history: EMPTY_HISTORY, asking: null };
			} else this.say(outcome.sentence);
			return outcome;
		} finally {
			this.busy = false;
		}
	}

	private takeDocument(document: SessionDocument): void {
		const subjects = this.queue.subjects;
		const idsOf = (of: 'tag' | 'alignment') => subjects.flatMap((s) => (s.startsWith(`${of} `) ? [s.slice(of.length + 1)] : []));
		this.state = withDocument(this.state, document, { tagIds: idsOf('tag'), recordingIds: idsOf('alignment') });
		this.rememberVersions(document);
	}

	private rememberVersions(document: SessionDocument): void {
		for (const tag of document.tags) this.queue.setVersion(`tag ${tag.id}`, tag.version);
		for (const [recordingId, { version }] of Object.entries(document.alignments)) this.queue.setVersion(`alignment ${recordingId}`, version);
	}

	/** Puts edits from before a reload on top of what the server gave. */
	private takeBackUp(edits: ReadonlyMap<Subject, Content>): void {
		if (edits.size === 0) return;
		const changes = [...edits].map(([subject, content]) => changeTo(subject, content));
		this.state = { ...this.state, ...setChanged(this.state, changes, 'after') };
	}

	private save(before: EditedParts): void {
		for (const change of changesBetween(before, this.state)) {
			if (change.of === 'tag') this.queue.put(`tag ${change.id}`, { of: 'tag', ...change.after });
			else this.queue.put(`alignment ${change.recordingId}`, { of: 'alignment', ...change.after });
		}
	}

	private noteSaved(subject: Subject, version: number, state: SessionState): void {
		if (state !== this.state.document.state) this.state = { ...this.state, document: { ...this.state.document, state } };
		const id = subject.slice(subject.indexOf(' ') + 1);
		const { tags, alignments } = this.state;
		this.state = subject.startsWith('tag ')
			? { ...this.state, tags: tags.map((t) => (t.id === id ? { ...t, version } : t)) }
			: { ...this.state, alignments: { ...alignments, [id]: { ...alignments[id], version } } };
	}

	private showSaving(): void {
		this.saveState = this.queue.status;
		this.stopped = this.queue.stopped;
	}
}

/** A change that sets a saved thing to a content. */
function changeTo(subject: Subject, content: Content): Change {
	const id = subject.slice(subject.indexOf(' ') + 1);
	return content.of === 'tag'
		? { of: 'tag', id, before: null, after: tagContent({ id, version: 0, ...content }) }
		: { of: 'alignment', recordingId: id, before: null, after: alignmentContent({ version: 0, ...content }) };
}

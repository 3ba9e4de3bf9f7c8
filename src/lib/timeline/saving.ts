/**
 * Keeps what was edited until the server has it. Everything is kept in the browser's store from the moment it is made
 * until it is acknowledged; what cannot be sent waits and is tried again; what a colleague changed in the meantime is
 * a conflict that keeps both versions until somebody chooses.
 *
 * One edit is on its way at a time. Of several edits of one thing that wait, only the last is sent. An edit whose
 * answer was lost is sent again as it was: the server knows it by its content and its base version.
 */
import type { AlignmentContent, SessionState, TagContent } from './model';

export type Content = ({ of: 'tag' } & TagContent) | ({ of: 'alignment' } & AlignmentContent);

/** What one saved thing is about: `tag <id>` or `alignment <recording>`. */
export type Subject = `tag ${string}` | `alignment ${string}`;

export interface EditToSend {
	subject: Subject;
	baseVersion: number;
	content: Content;
}

/** The other version in a conflict. */
export interface TheirVersion {
	version: number;
	content: Content;
	authorInitials: string;
}

export type SendResult =
	/** `state` is how far the session has come by it. */
	| { ok: true; version: number; state: SessionState }
	/** Somebody else's version stands there. */
	| { ok: false; why: 'conflict'; theirs: TheirVersion }
	/** The server will never take this one; the sentence says why. */
	| { ok: false; why: 'refused'; sentence: string }
	/** Not now: no connection, signed out, or a fault of the server. */
	| { ok: false; why: 'no connection' | 'signed out' | 'server fault' };

export type SaveStatus =
	| { kind: 'saved'; atMs: number | null }
	| { kind: 'saving'; count: number }
	| { kind: 'waiting'; count: number; why: 'no connection' | 'signed out' | 'server fault' }
	| { kind: 'conflict'; count: number }
	| { kind: 'refused'; count: number; sentence: string };

/** An edit that stopped: both versions are kept until somebody chooses. */
export interface Stopped {
	subject: Subject;
	mine: Content;
	theirs: TheirVersion | null;
	/** Why the server does not take it; null for a conflict. */
	sentence: string | null;
}

/** Where edits are kept while they are not acknowledged. */
export interface EditStore {
	read(): string[];
	/** Keeps this text; null forgets it. False = it could not be kept. */
	write(text: string | null): boolean;
}

interface Entry {
	baseVersion: number;
	/** On its way, or sent without an answer. */
	sent: Content | null;
	/** Made since. */
	next: Content | null;
	stopped: { theirs: TheirVersion | null; sentence: string | null } | null;
}

export interface SaveQueueOptions {
	send: (edit: EditToSend) => Promise<SendResult>;
	store: EditStore;
	now: () => number;
	/** Calls back after so many ms; the returned function takes that back. */
	later: (call: () => void, afterMs: number) => () => void;
	/** Something about the status or the stopped edits has changed. */
	onChange: () => void;
	/** An edit was acknowledged under this version. */
	onSaved?: (subject: Subject, version: number, state: SessionState) => void;
}

const RETRY_MS = [1000, 2000, 5000, 10_000, 20_000, 30_000];

export class SaveQueue {
	private readonly entries = new Map<Subject, Entry>();
	private readonly versions = new Map<Subject, number>();
	private sending = false;
	private failures = 0;
	private waitingFor: 'no connection' | 'signed out' | 'server fault' | null = null;
	private cancelRetry: (() => void) | null = null;
	private savedAtMs: number | null = null;
	/** False once the browser's store did not take an edit: then a reload would lose what waits. */
	storeWorks = true;

	constructor(private readonly options: SaveQueueOptions) {}

	/** The version on the server that a thing stands on; 0 = it is not there yet. */
	setVersion(subject: Subject, version: number): void {
		if (!this.entries.has(subject)) this.versions.set(subject, version);
	}

	/** Edits kept from before a reload. Give them to the editor first, then `resume`. */
	recover(): Map<Subject, Content> {
		const found = new Map<Subject, Content>();
		for (const text of this.options.store.read()) {
			for (const [subject, entry] of keptEntries(text)) {
				if (this.entries.has(subject)) continue;
				// Which way a stopped edit stopped is found out again.
				this.entries.set(subject, { ...entry, stopped: null });
				const content = entry.next ?? entry.sent;
				if (content) found.set(subject, content);
			}
		}
		if (found.size > 0) this.keep();
		return found;
	}

	/** Begins to send. */
	resume(): void {
		this.retryNow();
	}

	/** Takes an edit: kept at once, sent as soon as it can be. */
	put(subject: Subject, content: Content): void {
		const entry = this.entries.get(subject);
		if (entry) entry.next = content;
		else this.entries.set(subject, { baseVersion: this.versions.get(subject) ?? 0, sent: null, next: content, stopped: null });
		this.keep();
		this.options.onChange();
		void this.pump();
	}

	/** Sends what waits at once: the connection came back, or the window has the focus again. */
	retryNow(): void {
		this.cancelRetry?.();
		this.cancelRetry = null;
		void this.pump();
	}

	/** Settles a stopped edit: `mine` is put on top of theirs, `theirs` lets mine go. */
	settle(subject: Subject, choice: 'mine' | 'theirs'): void {
		const entry = this.entries.get(subject);
		if (!entry?.stopped) return;
		const { theirs } = entry.stopped;
		const mine = entry.next ?? entry.sent;
		if (choice === 'theirs' || !mine) {
			this.entries.delete(subject);
			if (theirs) this.versions.set(subject, theirs.version);
		} else this.entries.set(subject, { baseVersion: theirs?.version ?? entry.baseVersion, sent: null, next: mine, stopped: null });
		this.keep();
		this.options.onChange();
		void this.pump();
	}

	get stopped(): Stopped[] {
		return [...this.entries].flatMap(([subject, entry]) => {
			const mine = entry.next ?? entry.sent;
			return entry.stopped && mine ? [{ subject, mine, ...entry.stopped }] : [];
		});
	}

	/** What the unacknowledged edits are about. */
	get subjects(): Subject[] {
		return [...this.entries.keys()];
	}

	/** Edits that the server has not acknowledged. */
	get unsaved(): number {
		return this.entries.size;
	}

	get status(): SaveStatus {
		const stopped = this.stopped;
		const conflicts = stopped.filter((s) => s.theirs).length;
		if (conflicts > 0) return { kind: 'conflict', count: conflicts };
		if (stopped.length > 0) return { kind: 'refused', count: stopped.length, sentence: stopped[0].sentence ?? '' };
		if (this.entries.size === 0) return { kind: 'saved', atMs: this.savedAtMs };
		return this.waitingFor ? { kind: 'waiting', count: this.entries.size, why: this.waitingFor } : { kind: 'saving', count: this.entries.size };
	}

	/** Resolves once nothing is left that could be sent now. */
	private async pump(): Promise<void> {
		if (this.sending) return;
		this.sending = true;
		try {
			for (let edit = this.nextToSend(); edit && !this.cancelRetry; edit = this.nextToSend()) await this.sendOne(edit);
		} finally {
			this.sending = false;
		}
	}

	private nextToSend(): EditToSend | null {
		for (const [subject, entry] of this.entries) {
			if (entry.stopped) continue;
			if (entry.sent === null) [entry.sent, entry.next] = [entry.next, null];
			if (entry.sent) return { subject, baseVersion: entry.baseVersion, content: entry.sent };
		}
		return null;
	}

	private async sendOne(edit: EditToSend): Promise<void> {
		this.keep();
		let result: SendResult;
		try {
			result = await this.options.send(edit);
		} catch {
			result = { ok: false, why: 'no connection' };
		}
		const entry = this.entries.get(edit.subject);
		if (!entry) return;
		if (result.ok) {
			this.failures = 0;
			this.waitingFor = null;
			this.savedAtMs = this.options.now();
			this.versions.set(edit.subject, result.version);
			if (entry.next === null) this.entries.delete(edit.subject);
			else Object.assign(entry, { sent: null, baseVersion: result.version });
			this.options.onSaved?.(edit.subject, result.version, result.state);
		} else if (result.why === 'conflict') {
			this.waitingFor = null;
			entry.stopped = { theirs: result.theirs, sentence: null };
		} else if (result.why === 'refused') {
			this.waitingFor = null;
			entry.stopped = { theirs: null, sentence: result.sentence };
		} else {
			this.waitingFor = result.why;
			const afterMs = RETRY_MS[Math.min(this.failures++, RETRY_MS.length - 1)];
			this.cancelRetry = this.options.later(() => {
				this.cancelRetry = null;
				void this.pump();
			}, afterMs);
		}
		this.keep();
		this.options.onChange();
	}

	private keep(): void {
		const text = this.entries.size === 0 ? null : JSON.stringify([...this.entries]);
		this.storeWorks = this.options.store.write(text);
	}
}

/** Entries of a kept text; none when it is not one of ours. */
function keptEntries(text: string): [Subject, Entry][] {
	try {
		const parsed: unknown = JSON.parse(text);
		return Array.isArray(parsed) ? parsed.filter(isKeptEntry) : [];
	} catch {
		return [];
	}
}

function isKeptEntry(value: unknown): value is [Subject, Entry] {
	if (!Array.isArray(value) || value.length !== 2) return false;
	const [subject, entry] = value as [unknown, unknown];
	return typeof subject === 'string' && /^(tag|alignment) \S+$/.test(subject) && typeof entry === 'object' && entry !== null && 'baseVersion' in entry && typeof entry.baseVersion === 'number';
}

/** The status as the head line says it. */
export function saveStatusInWords(status: SaveStatus, clock: (atMs: number) => string): string {
	const changes = (n: number) => `${n} ${n === 1 ? 'change' : 'changes'}`;
	switch (status.kind) {
		case 'saved':
			return status.atMs === null ? 'saved' : `saved ${clock(status.atMs)}`;
		case 'saving':
			return 'saving';
		case 'waiting':
			if (status.why === 'no connection') return `${changes(status.count)} waiting, no connection`;
			return status.why === 'signed out' ? `${changes(status.count)} waiting, signed out` : `${changes(status.count)} waiting, the server does not answer as it should`;
		case 'conflict':
			return status.count === 1 ? 'one change meets a colleague’s' : `${status.count} changes meet a colleague’s`;
		case 'refused':
			return `${changes(status.count)} not taken`;
	}
}

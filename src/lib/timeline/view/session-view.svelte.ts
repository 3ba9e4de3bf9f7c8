/**
 * What the regions of the workstation draw, derived from the editor once: bench tracks, lanes, values at the cursor,
 * ranges. Each part changes only when what it rests on changes, so that a nudge does not prepare everything anew.
 */
import { alignmentOf, type CommandName } from '../commands';
import { commandNamed } from '../commands';
import type { TimelineEditor } from '../editor.svelte';
import { heldTrack, placeOf, referenceTrack, type EditorTrack } from '../state';
import type { Command } from '../transaction';
import { benchTrack, heartRateRange, ON_REFERENCE_CLOCK, type BenchTrack, type ClockPlace } from './bench-track';
import { valueAtCursor, type CursorValue } from './difference';
import { laneTags, type LaneTag } from './lane-layout';

export const TOO_NARROW = 'This window is for reading and review: offsets and tags change from 1100 px of width on.';

export class SessionView {
	readonly editor: TimelineEditor;
	/** The window is too narrow to work in; it still reads and reviews. */
	readOnly = $state(false);

	private readonly prepared = new WeakMap<EditorTrack, BenchTrack>();
	private readonly sourceTracks = $derived.by(() => this.editor.state.tracks);
	readonly tracks: BenchTrack[] = $derived.by(() =>
		this.sourceTracks.map((track) => {
			let ready = this.prepared.get(track);
			if (!ready) this.prepared.set(track, (ready = benchTrack(track)));
			return ready;
		})
	);
	readonly reference: BenchTrack | null = $derived.by(() => this.tracks.find((t) => t.recordingId === referenceTrack({ tracks: this.sourceTracks })?.recordingId) ?? null);
	readonly range = $derived.by(() => heartRateRange(this.tracks));
	readonly kinds = $derived.by(() => new Map(this.document.kinds.map((k) => [k.key, k])));
	readonly plan = $derived.by(() => this.document.plan);
	private readonly alignments = $derived.by(() => this.editor.state.alignments);
	private readonly tags = $derived.by(() => this.editor.state.tags);
	readonly heldTagId = $derived.by(() => this.editor.state.heldTagId);
	// Parts of the state as values of their own: what is drawn from one of them is left alone when another changes.
	readonly document = $derived.by(() => this.editor.state.document);
	readonly whole = $derived.by(() => this.editor.state.whole);
	readonly shown = $derived.by(() => this.editor.state.view);
	readonly show = $derived.by(() => this.editor.state.show);
	readonly ruleOpen: boolean = $derived.by(() => this.editor.state.ruleOpen);
	readonly asking = $derived.by(() => this.editor.state.asking);
	readonly draft = $derived.by(() => this.editor.state.draft);
	readonly dragging: boolean = $derived.by(() => this.editor.state.history.gesture !== null);
	readonly analysis = $derived.by(() => this.editor.state.analysis);
	readonly heldTag = $derived.by(() => this.tags.find((t) => t.id === this.heldTagId) ?? null);
	readonly cursorS: number = $derived.by(() => this.editor.state.cursorS);
	readonly heldId: string | null = $derived.by(() => heldTrack(this.editor.state)?.recordingId ?? null);
	readonly held: BenchTrack | null = $derived.by(() => this.tracks.find((t) => t.recordingId === this.heldId) ?? null);
	readonly heldWearable: BenchTrack | null = $derived.by(() => (this.held?.role === 'wearable' ? this.held : null));

	/** Tags of each track, in the order of the tracks. */
	readonly lanes: LaneTag[][] = $derived.by(() => this.tracks.map((t) => laneTags(this.tags, t, this.placeOf(t.recordingId), this.kinds, this.plan, this.heldTagId)));
	readonly listed: (LaneTag & { number: number })[] = $derived.by(() =>
		this.lanes.flatMap((lane, i) => lane.map((t) => ({ ...t, number: this.tracks[i].number }))).sort((a, b) => a.fromS - b.fromS || a.number - b.number)
	);
	readonly heldLane: LaneTag | null = $derived.by(() => this.listed.find((t) => t.held) ?? null);
	readonly values: ReadonlyMap<string, CursorValue> = $derived.by(
		() =>
			new Map(
				this.tracks.map((t) => [t.recordingId, valueAtCursor(this.cursorS, t, this.placeOf(t.recordingId), t.role === 'wearable' ? (this.reference?.heartRate ?? null) : null)])
			)
	);

	constructor(editor: TimelineEditor) {
		this.editor = editor;
	}

	placeOf = (recordingId: string): ClockPlace =>
		recordingId === this.reference?.recordingId ? ON_REFERENCE_CLOCK : placeOf({ tracks: this.sourceTracks, alignments: this.alignments }, recordingId);
	valueOf = (recordingId: string): CursorValue => this.values.get(recordingId) ?? { bpm: null, differenceBpm: null };
	alignmentOf = (recordingId: string) => (Object.hasOwn(this.alignments, recordingId) ? alignmentOf({ alignments: this.alignments }, recordingId) : null);

	/** Runs a command, unless the window is too narrow for what it would change. */
	run = (command: CommandName | Command): boolean => {
		if (this.readOnly && this.changesSession(command)) {
			this.editor.say(TOO_NARROW);
			return false;
		}
		return this.editor.run(command);
	};

	/** Would it change offsets or tags? Asks the command itself, without acting. */
	private changesSession(command: CommandName | Command): boolean {
		const act = typeof command === 'string' ? commandNamed(command) : command;
		let changes = false;
		act?.(this.editor.state, ({ patch, step }) => {
			changes ||= step !== null || patch.draft != null || 'alignments' in patch || 'tags' in patch;
		});
		return changes;
	}
}

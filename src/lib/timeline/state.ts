/**
 * The editor's state: a value. Commands make a new one of it (`commands/`), the page draws it, and nothing in here
 * knows of pages, saving or time passing.
 */
import type { TagKind } from '../agreement/tag';
import type { Trace } from '../formats/recording';
import { onAxis, onOwnClock, type AlignmentState, type SessionDocument, type Tag, type TimelineTrack } from './model';
import { EMPTY_HISTORY, type EditedParts, type History } from './step';

/** A recording with its samples, and where they begin and end on its own clock (0 and 0 without samples). */
export interface EditorTrack extends TimelineTrack {
	firstS: number;
	lastS: number;
}

/** Part of the session axis, epoch seconds on the reference's clock. */
export interface AxisSpan {
	fromS: number;
	toS: number;
}

/** A tag being made: its start is set, perhaps its end too; it has no kind yet. Times on the recording's own clock. */
interface TagDraft {
	recordingId: string;
	startS: number;
	endS: number | null;
}

/** A box that a command asks the page to open. */
export type Ask =
	| { what: 'command list' | 'keys' | 'go to time' | 'hand in' | 'hand back' | 'vouch' | 'take back' | 'reopen' | 'table' }
	| { what: 'note' | 'detail'; tagId: string };

export interface EditorState extends EditedParts {
	/** The session as the server gave it. Its `tags` and `alignments` are where editing began; the current ones stand below. */
	document: SessionDocument;
	/** Reference first, then the wearables by number. */
	tracks: readonly EditorTrack[];
	/** Span that holds every recording where it stands now. */
	whole: AxisSpan;
	/** Part shown on the bench. */
	view: AxisSpan;
	/** On the axis. */
	cursorS: number;
	/** Number of the held trace: 0 the reference, 1 to 6 a wearable; null when there is none. */
	heldNumber: number | null;
	heldTagId: string | null;
	/** Set by the first press of E, or by a drag on an empty lane. */
	draft: TagDraft | null;
	analysis: 'primary' | 'cleaned';
	ruleOpen: boolean;
	show: { difference: boolean; cadence: boolean; cadenceOverPlot: boolean };
	asking: Ask | null;
	/** The last thing said to the user: what happened, or why nothing did. `count` tells repetitions apart. */
	said: { text: string; count: number } | null;
	history: History;
}

/** Shortest span that the bench shows, s. */
export const SHORTEST_VIEW_S = 5;
/** Shortest tag, s. */
export const SHORTEST_TAG_S = 2;

/** Opens a session for editing: the first wearable held, the whole session shown, the cursor in the middle of it. */
export function openState(document: SessionDocument, traces: ReadonlyMap<string, Trace[]>): EditorState {
	const tracks = document.tracks
		.map((track): EditorTrack => {
			const own = (traces.get(track.recordingId) ?? []).filter((t) => t.tS.length > 0);
			return {
				...track,
				traces: own,
				firstS: own.length ? Math.min(...own.map((t) => t.tS[0])) : 0,
				lastS: own.length ? Math.max(...own.map((t) => t.tS[t.tS.length - 1])) : 0
			};
		})
		.sort((a, b) => a.number - b.number);
	const whole = wholeSpan(document, tracks, document.alignments);
	return {
		document,
		tracks,
		alignments: document.alignments,
		tags: document.tags,
		whole,
		view: whole,
		cursorS: Math.round((whole.fromS + whole.toS) / 2),
		heldNumber: (tracks.find((t) => t.role === 'wearable') ?? tracks[0])?.number ?? null,
		heldTagId: null,
		draft: null,
		analysis: 'primary',
		ruleOpen: true,
		show: { difference: true, cadence: true, cadenceOverPlot: false },
		asking: null,
		said: null,
		history: EMPTY_HISTORY
	};
}

/**
 * The state over a newer document of the same session.
 *
 * @param keep edits that the server does not have yet: they stay as they are here
 */
export function withDocument(state: EditorState, document: SessionDocument, keep: { tagIds: readonly string[]; recordingIds: readonly string[] }): EditorState {
	const alignments: Record<string, AlignmentState> = { ...document.alignments };
	for (const id of keep.recordingIds) if (Object.hasOwn(state.alignments, id)) alignments[id] = state.alignments[id];
	const kept = new Map(state.tags.filter((t) => keep.tagIds.includes(t.id)).map((t) => [t.id, t]));
	const tags = document.tags.map((t) => kept.get(t.id) ?? t);
	for (const [id, tag] of kept) if (!document.tags.some((t) => t.id === id)) tags.push(tag);
	const held = tags.find((t) => t.id === state.heldTagId);
	return { ...state, document, alignments, tags, heldTagId: held ? held.id : null, draft: document.can.annotate ? state.draft : null, whole: wholeSpan(document, state.tracks, alignments) };
}

/** From the first to the last sample of all recordings where they stand; the session's own span when there are none. */
export function wholeSpan(
	document: Pick<SessionDocument, 'startsAtS' | 'endsAtS'>,
	tracks: readonly EditorTrack[],
	alignments: EditorState['alignments']
): AxisSpan {
	let fromS = Infinity;
	let toS = -Infinity;
	for (const track of tracks) {
		if (track.traces.length === 0) continue;
		const place = placeOfTrack(track, alignments);
		fromS = Math.min(fromS, onAxis(track.firstS, place, track.firstS));
		toS = Math.max(toS, onAxis(track.lastS, place, track.firstS));
	}
	if (fromS > toS) [fromS, toS] = [document.startsAtS, document.endsAtS];
	const shortBy = SHORTEST_VIEW_S - (toS - fromS);
	return shortBy > 0 ? { fromS: fromS - shortBy / 2, toS: toS + shortBy / 2 } : { fromS, toS };
}

type ClockPlace = Pick<AlignmentState, 'offsetS' | 'driftPpm'>;
const ON_REFERENCE_CLOCK: ClockPlace = { offsetS: 0, driftPpm: 0 };

function placeOfTrack(track: EditorTrack, alignments: EditorState['alignments']): ClockPlace {
	return track.role === 'reference' ? ON_REFERENCE_CLOCK : (alignments[track.recordingId] ?? ON_REFERENCE_CLOCK);
}

export const trackByNumber = (state: Pick<EditorState, 'tracks'>, number: number | null): EditorTrack | null =>
	state.tracks.find((t) => t.number === number) ?? null;
export const trackOf = (state: Pick<EditorState, 'tracks'>, recordingId: string): EditorTrack | null =>
	state.tracks.find((t) => t.recordingId === recordingId) ?? null;
export const referenceTrack = (state: Pick<EditorState, 'tracks'>): EditorTrack | null => state.tracks.find((t) => t.role === 'reference') ?? null;
export const heldTrack = (state: EditorState): EditorTrack | null => trackByNumber(state, state.heldNumber);
/** The held trace when it is a wearable: what offsets act on. */
export function heldWearable(state: EditorState): EditorTrack | null {
	const track = heldTrack(state);
	return track?.role === 'wearable' ? track : null;
}
export const tagOf = (state: Pick<EditorState, 'tags'>, tagId: string | null): Tag | null =>
	tagId === null ? null : (state.tags.find((t) => t.id === tagId) ?? null);
export const heldTag = (state: EditorState): Tag | null => tagOf(state, state.heldTagId);
export const kindOf = (state: Pick<EditorState, 'document'>, key: string): TagKind | null => state.document.kinds.find((k) => k.key === key) ?? null;

/** Where a recording's clock stands against the reference's. */
export function placeOf(state: Pick<EditorState, 'tracks' | 'alignments'>, recordingId: string): ClockPlace {
	const track = trackOf(state, recordingId);
	return track ? placeOfTrack(track, state.alignments) : ON_REFERENCE_CLOCK;
}

/** A time of the axis on a recording's own clock. */
export function toOwnClock(state: Pick<EditorState, 'tracks' | 'alignments'>, recordingId: string, axisS: number): number {
	return onOwnClock(axisS, placeOf(state, recordingId), trackOf(state, recordingId)?.firstS ?? 0);
}

/** A tag's span on the axis. */
export function spanOfTag(state: Pick<EditorState, 'tracks' | 'alignments'>, tag: Pick<Tag, 'recordingId' | 'startS' | 'endS'>): AxisSpan {
	const place = placeOf(state, tag.recordingId);
	const firstS = trackOf(state, tag.recordingId)?.firstS ?? 0;
	return { fromS: onAxis(tag.startS, place, firstS), toS: onAxis(tag.endS, place, firstS) };
}

/** Tags that stand on the lanes: proposed and accepted. */
export const standingTags = (state: Pick<EditorState, 'tags'>): Tag[] => state.tags.filter((t) => t.status === 'proposed' || t.status === 'accepted');

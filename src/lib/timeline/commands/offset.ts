/**
 * The held wearable's offset. What a person sets stands to the hundredth of a second, as the rule shows it, so that
 * the reading and the stored value are the same.
 */
import { signed } from '../../text/figures';
import type { AlignmentState } from '../model';
import { heldWearable, referenceTrack, trackOf, type EditorState, type EditorTrack } from '../state';
import type { Change } from '../step';
import { change, refuse, type Command } from '../transaction';
import { closedBecause, shortTraceName, signedSeconds, traceName } from '../words';

/** An offset that nobody has set or searched yet. */
const UNSET: AlignmentState = { version: 0, offsetS: 0, driftPpm: 0, locked: false, method: 'hand', estimate: null };
const FARTHEST_S = 400 * 86_400;

export const alignmentOf = (state: Pick<EditorState, 'alignments'>, recordingId: string): AlignmentState =>
	Object.hasOwn(state.alignments, recordingId) ? state.alignments[recordingId] : UNSET;

const hundredths = (offsetS: number): number => Math.round(offsetS * 100) / 100;

/** Why this wearable's offset does not move; null when it does. */
export function offsetObstacle(state: EditorState, track: EditorTrack | null): string | null {
	if (!track) return 'Hold a wearable first: keys 1 to 6. The reference’s clock is the axis and does not move.';
	const closed = closedBecause(state.document, 'align');
	if (closed) return closed;
	if (!referenceTrack(state)) return 'This session has no reference to align to. Bring in the strap’s file of the same time.';
	const { locked, offsetS } = alignmentOf(state, track.recordingId);
	return locked ? `${traceName(track)} is locked at ${signed(offsetS, 2)} s. Press L to unlock it.` : null;
}

function withOffset(state: EditorState, track: EditorTrack, offsetS: number, method: AlignmentState['method']): EditorState['alignments'] {
	return { ...state.alignments, [track.recordingId]: { ...alignmentOf(state, track.recordingId), offsetS: hundredths(offsetS), method } };
}

/** `offset 1 Wrenna +0.3 s`, from the offsets before and after. */
function offsetStepName(track: EditorTrack, beforeS: number, afterS: number): string {
	return `offset ${shortTraceName(track)} ${signedSeconds(afterS - beforeS)}`;
}
function nameOf(track: EditorTrack): (changes: Change[]) => string {
	return (changes) => {
		const moved = changes.find((c) => c.of === 'alignment');
		return moved?.of === 'alignment' ? offsetStepName(track, moved.before?.offsetS ?? 0, moved.after.offsetS) : `offset ${shortTraceName(track)}`;
	};
}

/** Moves the held wearable by so many seconds. A row of nudges becomes one step. */
export const nudge =
	(seconds: number): Command =>
	(state, dispatch) => {
		const track = heldWearable(state);
		const obstacle = offsetObstacle(state, track);
		if (obstacle || !track) return refuse(dispatch, obstacle ?? 'Hold a wearable first.');
		const beforeS = alignmentOf(state, track.recordingId).offsetS;
		const afterS = hundredths(beforeS + seconds);
		if (Math.abs(afterS) > FARTHEST_S) return refuse(dispatch, 'An offset of more than 400 days is no offset: check the file’s dates.');
		return change(
			dispatch,
			offsetStepName(track, beforeS, afterS),
			{ alignments: withOffset(state, track, afterS, 'hand') },
			{ mergeKey: `nudge ${track.recordingId}`, nameMerged: nameOf(track), say: `Offset of ${traceName(track)} ${signed(afterS, 2)} s.` }
		);
	};

/** Sets a wearable's offset, by a drag or as one of the search's candidates. */
export const setOffset =
	(recordingId: string, offsetS: number, method: 'hand' | 'candidate' = 'hand'): Command =>
	(state, dispatch) => {
		const track = trackOf(state, recordingId);
		const obstacle = offsetObstacle(state, track?.role === 'wearable' ? track : null);
		if (obstacle || !track) return refuse(dispatch, obstacle ?? 'That recording is no longer in this session.');
		const before = alignmentOf(state, recordingId);
		const afterS = hundredths(offsetS);
		if (before.offsetS === afterS && (method === 'hand' || before.method === method)) return refuse(dispatch, `${traceName(track)} stands at ${signed(afterS, 2)} s.`);
		const name = method === 'candidate' ? `${shortTraceName(track)} at a candidate` : offsetStepName(track, before.offsetS, afterS);
		return change(dispatch, name, { alignments: withOffset(state, track, afterS, method), heldNumber: track.number });
	};

/** Puts the held wearable where the search found the best fit. This also decides an offset that was only proposed. */
export const putAtPeak: Command = (state, dispatch) => {
	const track = heldWearable(state);
	const obstacle = offsetObstacle(state, track);
	if (obstacle || !track) return refuse(dispatch, obstacle ?? 'Hold a wearable first.');
	const before = alignmentOf(state, track.recordingId);
	if (!before.estimate) return refuse(dispatch, `No offset has been searched for ${traceName(track)} yet.`);
	if (before.estimate.bestFitShiftS === null) return refuse(dispatch, `There is no peak to go to. ${before.estimate.reason}`);
	const afterS = hundredths(before.estimate.bestFitShiftS);
	if (before.offsetS === afterS && before.method === 'peak') return refuse(dispatch, `${traceName(track)} stands at the peak.`);
	return change(
		dispatch,
		`${shortTraceName(track)} at the peak`,
		{ alignments: withOffset(state, track, afterS, 'peak') },
		{ say: `${traceName(track)} at the peak, ${signed(afterS, 2)} s.${before.estimate.reliable ? '' : ` ${before.estimate.reason}`}` }
	);
};

/** Locks the held wearable's offset, or unlocks it. Locking is a decision: a proposed offset becomes a person's. */
export const toggleLock: Command = (state, dispatch) => {
	const track = heldWearable(state);
	if (!track) return refuse(dispatch, 'Hold a wearable first: keys 1 to 6.');
	const closed = closedBecause(state.document, 'align');
	if (closed) return refuse(dispatch, closed);
	if (!referenceTrack(state)) return refuse(dispatch, 'This session has no reference to align to. Bring in the strap’s file of the same time.');
	const before = alignmentOf(state, track.recordingId);
	const peakS = before.estimate?.bestFitShiftS ?? null;
	const method = before.method === 'proposed' ? (peakS !== null && Math.abs(before.offsetS - peakS) < 0.0051 ? 'peak' : 'hand') : before.method;
	const locked = !before.locked;
	return change(
		dispatch,
		`${locked ? 'lock' : 'unlock'} ${shortTraceName(track)}`,
		{ alignments: { ...state.alignments, [track.recordingId]: { ...before, locked, method } } },
		{ say: `${traceName(track)} ${locked ? 'locked' : 'unlocked'} at ${signed(before.offsetS, 2)} s.` }
	);
};

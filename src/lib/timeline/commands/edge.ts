/** Making tags and moving their edges. */
import { clockTime } from '../../text/figures';
import type { Tag } from '../model';
import { nearestSnap, snapTargets } from '../snap';
import { heldTag, heldTrack, kindOf, spanOfTag, tagOf, toOwnClock, trackOf, type EditorState } from '../state';
import { longEnough, newTagId, putTag } from '../tag-rules';
import { change, refuse, show, type Command, type Dispatch } from '../transaction';
import { closedBecause, kindWord, signedSeconds, traceName } from '../words';

/** How far Shift+E looks for something to snap to, s. */
const SNAP_EDGES_REACH_S = 10;
const TOO_SHORT = 'A tag is at least 2 s long.';

/**
 * E: sets an edge at the cursor. With a tag held, its nearer edge goes there. With none, the first press starts a tag
 * on the held trace and the second ends it; its kind is then asked by letter.
 */
export const setEdge: Command = (state, dispatch) => {
	const closed = closedBecause(state.document, 'annotate');
	if (closed) return refuse(dispatch, closed);
	const tag = heldTag(state);
	if (tag && !state.draft) {
		const { fromS, toS } = spanOfTag(state, tag);
		return moveEdge(tag.id, Math.abs(state.cursorS - fromS) <= Math.abs(state.cursorS - toS) ? 'start' : 'end', state.cursorS)(state, dispatch);
	}
	const track = heldTrack(state);
	if (!track) return refuse(dispatch, 'Hold a trace first: keys 1 to 6, or the arrow keys.');
	const atS = toOwnClock(state, track.recordingId, state.cursorS);
	if (!state.draft || state.draft.recordingId !== track.recordingId || state.draft.endS !== null)
		return show(dispatch, { draft: { recordingId: track.recordingId, startS: atS, endS: null }, heldTagId: null }, `Start at ${clockTime(state.cursorS)} on ${traceName(track)}. Move the cursor and press E for the end.`);
	return draftTo(state, dispatch, state.draft.recordingId, state.draft.startS, atS);
};

function draftTo(state: EditorState, dispatch: Dispatch | undefined, recordingId: string, fromS: number, toS: number): boolean {
	const [startS, endS] = fromS <= toS ? [fromS, toS] : [toS, fromS];
	if (!longEnough(startS, endS)) return refuse(dispatch, `${TOO_SHORT} Move the cursor farther from the start.`);
	const letters = state.document.kinds.flatMap((k) => (k.hotkey ? [`${k.hotkey} ${k.name.toLowerCase()}`] : [])).join(', ');
	return show(dispatch, { draft: { recordingId, startS, endS }, heldTagId: null }, `What kind? ${letters}. Esc drops it.`);
}

/** Draws a tag on an empty lane between two moments of the axis; its kind is then asked by letter. */
export const draftBetween =
	(recordingId: string, fromAxisS: number, toAxisS: number): Command =>
	(state, dispatch) => {
		const closed = closedBecause(state.document, 'annotate');
		if (closed) return refuse(dispatch, closed);
		const track = trackOf(state, recordingId);
		if (!track) return refuse(dispatch, 'That recording is no longer in this session.');
		const held: EditorState = { ...state, heldNumber: track.number };
		return draftTo(held, dispatch && ((t) => dispatch({ ...t, patch: { ...t.patch, heldNumber: track.number } })), recordingId, toOwnClock(state, recordingId, fromAxisS), toOwnClock(state, recordingId, toAxisS));
	};

/**
 * The letter of a kind. A tag being made gets it and stands (its end is the cursor when only its start was set); a
 * held tag changes to it; a held proposal becomes an accepted tag of that kind.
 */
export const setKind =
	(key: string): Command =>
	(state, dispatch) => {
		const closed = closedBecause(state.document, 'annotate');
		if (closed) return refuse(dispatch, closed);
		const kind = kindOf(state, key);
		if (!kind) return refuse(dispatch, `This team has no kind “${key}”.`);
		if (state.draft) {
			const { recordingId, startS: fromS, endS: setEndS } = state.draft;
			const toS = setEndS ?? toOwnClock(state, recordingId, state.cursorS);
			const [startS, endS] = fromS <= toS ? [fromS, toS] : [toS, fromS];
			if (!longEnough(startS, endS)) return refuse(dispatch, `${TOO_SHORT} Move the cursor farther from the start.`);
			const made: Tag = {
				id: newTagId(),
				version: 0,
				recordingId,
				kind: key,
				startS,
				endS,
				status: 'accepted',
				cleanedOverride: null,
				evidence: '',
				note: '',
				authorInitials: state.document.me.initials
			};
			const name = `new ${kindWord(kind, key)}`;
			return change(dispatch, name, { tags: putTag(state.tags, made), draft: null, heldTagId: made.id, heldNumber: trackOf(state, recordingId)?.number ?? state.heldNumber });
		}
		const tag = heldTag(state);
		if (!tag) return refuse(dispatch, `${kind.name}: hold a tag to change its kind, or set the start of a new one with E.`);
		if (tag.kind === key && tag.status === 'accepted') return refuse(dispatch, `This tag is ${kindWord(kind, key)} already.`);
		return change(dispatch, `kind ${kindWord(kind, key)}`, {
			tags: putTag(state.tags, { ...tag, kind: key, status: 'accepted', cleanedOverride: tag.kind === key ? tag.cleanedOverride : null, authorInitials: state.document.me.initials })
		});
	};

/** Moves an edge of a tag to a moment of the axis. A neighbour in the way gives way. */
export const moveEdge =
	(tagId: string, edge: 'start' | 'end', axisS: number): Command =>
	(state, dispatch) => {
		const closed = closedBecause(state.document, 'annotate');
		if (closed) return refuse(dispatch, closed);
		const tag = tagOf(state, tagId);
		if (!tag) return refuse(dispatch, 'That tag is no longer in this session.');
		const atS = toOwnClock(state, tag.recordingId, axisS);
		const moved = edge === 'start' ? { ...tag, startS: atS } : { ...tag, endS: atS };
		if (!longEnough(moved.startS, moved.endS)) return refuse(dispatch, TOO_SHORT);
		const byS = edge === 'start' ? atS - tag.startS : atS - tag.endS;
		if (byS === 0) return refuse(dispatch, `The ${edge} stands there already.`);
		return change(dispatch, `${edge} ${signedSeconds(byS)}`, {
			tags: putTag(state.tags, { ...moved, authorInitials: state.document.me.initials }),
			heldTagId: tag.id,
			heldNumber: trackOf(state, tag.recordingId)?.number ?? state.heldNumber
		});
	};

/** Shift+E: moves both edges of the held tag to the nearest thing that an edge would aim at, within 10 s. */
export const snapEdges: Command = (state, dispatch) => {
	const closed = closedBecause(state.document, 'annotate');
	if (closed) return refuse(dispatch, closed);
	const tag = heldTag(state);
	if (!tag) return refuse(dispatch, 'Hold a tag first, then Shift and E snap its edges.');
	const { fromS, toS } = spanOfTag(state, tag);
	// The cursor is where E aims; snapping looks for what is in the data.
	const targets = snapTargets(state, tag.recordingId).filter((t) => t !== state.cursorS);
	const startAxisS = nearestSnap(targets, fromS, SNAP_EDGES_REACH_S) ?? fromS;
	const endAxisS = nearestSnap(targets, toS, SNAP_EDGES_REACH_S) ?? toS;
	if (startAxisS === fromS && endAxisS === toS) return refuse(dispatch, 'Nothing to snap to within 10 s of either edge.');
	const startS = startAxisS === fromS ? tag.startS : toOwnClock(state, tag.recordingId, startAxisS);
	const endS = endAxisS === toS ? tag.endS : toOwnClock(state, tag.recordingId, endAxisS);
	if (!longEnough(startS, endS)) return refuse(dispatch, 'Both edges would snap to the same place, and a tag is at least 2 s long.');
	return change(
		dispatch,
		'snap edges',
		{ tags: putTag(state.tags, { ...tag, startS, endS, authorInitials: state.document.me.initials }) },
		{ say: `Start ${signedSeconds(startS - tag.startS)}, end ${signedSeconds(endS - tag.endS)}.` }
	);
};

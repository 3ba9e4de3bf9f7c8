/** The held tag: holding, its note, in or out of the cleaned analysis, removing, letting go. */
import { heldTag, heldTrack, kindOf, spanOfTag, standingTags, tagOf, trackOf, type EditorState } from '../state';
import type { Tag } from '../model';
import { cleanedStanding, putTag } from '../tag-rules';
import { change, refuse, show, type Command } from '../transaction';
import { closedBecause, kindWord, tagInWords } from '../words';
import { viewShowingSpan } from './cursor';

/** The parts of the state that hold a tag: its trace with it, and the view on it. */
export function holding(state: EditorState, tag: Tag): Pick<EditorState, 'heldTagId' | 'heldNumber' | 'view' | 'draft'> {
	return { heldTagId: tag.id, heldNumber: trackOf(state, tag.recordingId)?.number ?? state.heldNumber, view: viewShowingSpan(state, spanOfTag(state, tag)), draft: null };
}

/** Holds a tag and brings it into sight. */
export const holdTag =
	(tagId: string): Command =>
	(state, dispatch) => {
		const tag = tagOf(state, tagId);
		if (!tag || (tag.status !== 'proposed' && tag.status !== 'accepted')) return refuse(dispatch, 'That tag no longer stands.');
		return show(dispatch, holding(state, tag));
	};

/** The tag of the held trace under the cursor: accepted before proposed. */
function tagAtCursor(state: EditorState): Tag | null {
	const track = heldTrack(state);
	const under = standingTags(state).filter((tag) => {
		if (tag.recordingId !== track?.recordingId) return false;
		const { fromS, toS } = spanOfTag(state, tag);
		return fromS <= state.cursorS && state.cursorS < toS;
	});
	return under.find((t) => t.status === 'accepted') ?? under[0] ?? null;
}

/** Enter: holds the tag under the cursor; pressed on a held tag, opens its detail. */
export const openDetail: Command = (state, dispatch) => {
	const tag = heldTag(state);
	if (tag) return show(dispatch, { asking: { what: 'detail', tagId: tag.id } });
	const under = tagAtCursor(state);
	if (!under) return refuse(dispatch, 'No tag of the held trace stands under the cursor.');
	return show(dispatch, holding(state, under), tagInWords(state, under));
};

/** Esc: lets go, one thing at a press: the box, the tag being made, the held tag. */
export const letGo: Command = (state, dispatch) => {
	if (state.asking) return show(dispatch, { asking: null });
	if (state.draft) return show(dispatch, { draft: null }, 'Dropped.');
	if (state.heldTagId) return show(dispatch, { heldTagId: null });
	return refuse(dispatch, 'Nothing to let go of. Tab leaves the bench.');
};

/** I: moves the held tag in or out of the cleaned analysis, against the plan's rule or back to it. */
export const toggleCleaned: Command = (state, dispatch) => {
	const closed = closedBecause(state.document, 'annotate');
	if (closed) return refuse(dispatch, closed);
	const tag = heldTag(state);
	const kind = tag && kindOf(state, tag.kind);
	const track = tag && trackOf(state, tag.recordingId);
	if (!tag || !kind || !track) return refuse(dispatch, 'Hold a tag first, then I moves it in or out of the cleaned analysis.');
	if (tag.status === 'proposed') return refuse(dispatch, 'A proposal takes nothing out. Accept it first with A.');
	const standing = cleanedStanding(tag, kind, track.role, state.document.plan);
	if (standing.fixed) return refuse(dispatch, standing.why);
	const wanted = standing.out ? 'in' : 'out';
	const asPlanned = cleanedStanding({ cleanedOverride: null }, kind, track.role, state.document.plan).out === (wanted === 'out');
	return change(
		dispatch,
		`${kindWord(kind, tag.kind)} ${wanted === 'out' ? 'out of' : 'into'} cleaned`,
		{ tags: putTag(state.tags, { ...tag, cleanedOverride: asPlanned ? null : wanted, authorInitials: state.document.me.initials }) },
		{ say: wanted === 'out' ? 'Left out of the cleaned analysis.' : 'Counted in the cleaned analysis.' }
	);
};

/** J: opens the box for a note on the held tag. */
export const askForNote: Command = (state, dispatch) => {
	const closed = closedBecause(state.document, 'annotate');
	if (closed) return refuse(dispatch, closed);
	const tag = heldTag(state);
	return tag ? show(dispatch, { asking: { what: 'note', tagId: tag.id } }) : refuse(dispatch, 'Hold a tag first, then J jots a note on it.');
};

/** Writes the note of a tag. */
export const setNote =
	(tagId: string, note: string): Command =>
	(state, dispatch) => {
		const closed = closedBecause(state.document, 'annotate');
		if (closed) return refuse(dispatch, closed);
		const tag = tagOf(state, tagId);
		if (!tag) return refuse(dispatch, 'That tag is no longer in this session.');
		if (tag.note === note) return show(dispatch, { asking: null });
		return change(dispatch, note === '' ? 'note taken off' : 'note', {
			tags: state.tags.map((t) => (t.id === tagId ? { ...t, note, authorInitials: state.document.me.initials } : t)),
			asking: null
		});
	};

/** Delete: removes the held tag. A proposal is crossed out instead, so that it is not proposed again. */
export const removeTag: Command = (state, dispatch) => {
	const closed = closedBecause(state.document, 'annotate');
	if (closed) return refuse(dispatch, closed);
	const tag = heldTag(state);
	if (!tag) return refuse(dispatch, 'Hold a tag first, then Delete removes it.');
	const word = kindWord(kindOf(state, tag.kind), tag.kind);
	const status = tag.status === 'proposed' ? 'crossed out' : 'removed';
	return change(
		dispatch,
		status === 'removed' ? `remove ${word}` : `cross out ${word}`,
		{ tags: state.tags.map((t) => (t.id === tag.id ? { ...t, status, authorInitials: state.document.me.initials } : t)), heldTagId: null },
		{ say: status === 'removed' ? `${tagInWords(state, tag).slice(0, -1)} removed.` : 'Crossed out.' }
	);
};

/** Undo and redo, and handing the session on. What needs the server or a text opens a box. */
import { stepBack, stepForward, type Turn } from '../history';
import { referenceTrack } from '../state';
import { refuse, show, type Command } from '../transaction';
import { closedBecause, traceName } from '../words';
import { alignmentOf } from './offset';

function turned(turn: Turn, dispatch: Parameters<Command>[1], verb: 'Undone' | 'Done again'): boolean {
	const { history, alignments, tags, heldNumber, heldTagId } = turn.state;
	if (turn.ok) return show(dispatch, { history, alignments, tags, heldNumber, heldTagId, draft: null }, `${verb}: ${turn.step.name}.`);
	if (turn.why === 'nothing') return refuse(dispatch, verb === 'Undone' ? 'Nothing to undo.' : 'Nothing to do again.');
	show(dispatch, { history }, 'A colleague changed the same thing since. Press again to put yours back anyway; theirs stays in the record.');
	return false;
}

export const undo: Command = (state, dispatch) =>
	state.history.gesture ? refuse(dispatch, 'Let go of the drag first; Esc puts it back.') : turned(stepBack(state), dispatch, 'Undone');
export const redo: Command = (state, dispatch) =>
	state.history.gesture ? refuse(dispatch, 'Let go of the drag first; Esc puts it back.') : turned(stepForward(state), dispatch, 'Done again');

/** Shift+Enter: hands the session to review, when every wearable's offset stands. */
export const askToHandIn: Command = (state, dispatch) => {
	const closed = closedBecause(state.document, 'submit');
	if (closed) return refuse(dispatch, closed);
	if (!referenceTrack(state)) return refuse(dispatch, 'Without a reference there is nothing to review. Bring in the strap’s file of the same time.');
	const wearables = state.tracks.filter((t) => t.role === 'wearable');
	if (wearables.length === 0) return refuse(dispatch, 'Without a wearable there is nothing to review. Bring in its file.');
	for (const track of wearables) {
		const { method, estimate } = alignmentOf(state, track.recordingId);
		const stands = Object.hasOwn(state.alignments, track.recordingId) && (method !== 'proposed' || estimate?.reliable === true);
		if (!stands) return refuse(dispatch, `The offset of ${traceName(track)} is not decided yet. Check it, then lock it or put it at the peak.`);
	}
	return show(dispatch, { asking: { what: 'hand in' } });
};

const askAbout =
	(what: 'vouch' | 'hand back', act: 'review'): Command =>
	(state, dispatch) => {
		const closed = closedBecause(state.document, act);
		return closed ? refuse(dispatch, closed) : show(dispatch, { asking: { what } });
	};
export const askToVouch = askAbout('vouch', 'review');
export const askToHandBack = askAbout('hand back', 'review');

export const askToTakeBack: Command = (state, dispatch) => {
	const closed = closedBecause(state.document, 'takeBack');
	return closed ? refuse(dispatch, closed) : show(dispatch, { asking: { what: 'take back' } });
};
export const askToReopen: Command = (state, dispatch) => {
	const closed = closedBecause(state.document, 'reopen');
	return closed ? refuse(dispatch, closed) : show(dispatch, { asking: { what: 'reopen' } });
};

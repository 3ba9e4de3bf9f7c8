/** Which trace is held. */
import { trackByNumber, trackOf } from '../state';
import { refuse, show, type Command } from '../transaction';
import { traceName } from '../words';

/** Holds the trace of a number: 0 the reference, 1 to 6 a wearable. A tag of another trace is let go. */
export const holdTrace =
	(number: number): Command =>
	(state, dispatch) => {
		const track = trackByNumber(state, number);
		if (!track) return refuse(dispatch, number === 0 ? 'This session has no reference.' : `There is no wearable ${number} in this session.`);
		if (state.heldNumber === number) return refuse(dispatch, `${traceName(track)} is held.`);
		const tag = state.tags.find((t) => t.id === state.heldTagId);
		return show(dispatch, {
			heldNumber: number,
			heldTagId: tag?.recordingId === track.recordingId ? state.heldTagId : null,
			draft: state.draft?.recordingId === track.recordingId ? state.draft : null
		});
	};

/** Holds the trace of a recording. */
export const holdRecording =
	(recordingId: string): Command =>
	(state, dispatch) => {
		const track = trackOf(state, recordingId);
		return track ? holdTrace(track.number)(state, dispatch) : refuse(dispatch, 'That recording is no longer in this session.');
	};

/** Holds the trace after (or before) the held one, in the order of the plates, from the last to the first again. */
const holdNeighbour =
	(direction: 1 | -1): Command =>
	(state, dispatch) => {
		const { tracks } = state;
		if (tracks.length === 0) return refuse(dispatch, 'This session holds no recordings.');
		const at = tracks.findIndex((t) => t.number === state.heldNumber);
		const next = at < 0 ? 0 : (at + direction + tracks.length) % tracks.length;
		return holdTrace(tracks[next].number)(state, dispatch);
	};
export const holdNext = holdNeighbour(1);
export const holdPrevious = holdNeighbour(-1);

/** Moving the cursor and the view along the session. */
import { clockTime } from '../../text/figures';
import { heldTag, SHORTEST_VIEW_S, spanOfTag, type AxisSpan, type EditorState } from '../state';
import { refuse, show, type Command } from '../transaction';

/** Share of the view that stays beyond the cursor when the view follows it. */
const MARGIN_SHARE = 0.08;
const ZOOM_STEP = 1.6;

const clamp = (value: number, low: number, high: number): number => Math.min(high, Math.max(low, value));

/** The view of this length nearest to the wanted one that stays within the session. */
export function viewWithin(whole: AxisSpan, fromS: number, lengthS: number): AxisSpan {
	const length = clamp(lengthS, SHORTEST_VIEW_S, whole.toS - whole.fromS);
	const from = clamp(fromS, whole.fromS, whole.toS - length);
	return { fromS: from, toS: from + length };
}

/** The view, moved no more than needed to show a moment with some room beyond it. */
export function viewShowing(state: EditorState, axisS: number): AxisSpan {
	const { view, whole } = state;
	const length = view.toS - view.fromS;
	const margin = length * MARGIN_SHARE;
	if (axisS < view.fromS) return viewWithin(whole, axisS - margin, length);
	if (axisS > view.toS) return viewWithin(whole, axisS + margin - length, length);
	return view;
}

/** The view, moved no more than needed to show a span; opened wider when the span is longer than it. */
export function viewShowingSpan(state: EditorState, span: AxisSpan): AxisSpan {
	const { view, whole } = state;
	const length = view.toS - view.fromS;
	const spanS = span.toS - span.fromS;
	if (spanS > length * (1 - 2 * MARGIN_SHARE)) return viewWithin(whole, span.fromS - spanS * 0.25, spanS * 1.5);
	const margin = length * MARGIN_SHARE;
	if (span.fromS < view.fromS + margin) return span.fromS >= view.fromS && span.toS <= view.toS ? view : viewWithin(whole, span.fromS - margin, length);
	if (span.toS > view.toS) return viewWithin(whole, span.toS + margin - length, length);
	return view;
}

/** Puts the cursor at a moment of the axis; the view follows when it has to. Past an end it stays at the end and says so. */
export const moveCursorTo =
	(axisS: number): Command =>
	(state, dispatch) => {
		const { fromS, toS } = state.whole;
		const at = clamp(axisS, fromS, toS);
		if (at === state.cursorS) return refuse(dispatch, at === fromS ? 'The cursor stands at the start of the session.' : at === toS ? 'The cursor stands at the end of the session.' : `The cursor stands at ${clockTime(at)}.`);
		return show(dispatch, { cursorS: at, view: viewShowing(state, at) });
	};

/** Moves the cursor by so many seconds. */
export const moveCursorBy =
	(seconds: number): Command =>
	(state, dispatch) =>
		moveCursorTo(state.cursorS + seconds)(state, dispatch);

/** Shows the next stretch of the same length; the cursor keeps its place on the screen. */
const turnView =
	(direction: 1 | -1): Command =>
	(state, dispatch) => {
		const { view, whole } = state;
		const length = view.toS - view.fromS;
		const next = viewWithin(whole, view.fromS + direction * length, length);
		if (next.fromS === view.fromS) return moveCursorTo(direction < 0 ? whole.fromS : whole.toS)(state, dispatch);
		return show(dispatch, { view: next, cursorS: clamp(state.cursorS + next.fromS - view.fromS, whole.fromS, whole.toS) });
	};
export const viewForward = turnView(1);
export const viewBack = turnView(-1);

export const goToStart: Command = (state, dispatch) => moveCursorTo(state.whole.fromS)(state, dispatch);
export const goToEnd: Command = (state, dispatch) => moveCursorTo(state.whole.toS)(state, dispatch);

/** Opens the box that asks for a time. */
export const askForTime: Command = (_state, dispatch) => show(dispatch, { asking: { what: 'go to time' } });

/** Goes to a time that was asked for, with the view round it. */
export const goToTime =
	(axisS: number): Command =>
	(state, dispatch) => {
		const { view, whole } = state;
		if (axisS < whole.fromS || axisS > whole.toS)
			return refuse(dispatch, `The session runs from ${clockTime(whole.fromS)} to ${clockTime(whole.toS)} UTC; ${clockTime(axisS)} is outside it.`);
		const length = view.toS - view.fromS;
		const inSight = axisS >= view.fromS && axisS <= view.toS;
		return show(dispatch, { cursorS: axisS, view: inSight ? view : viewWithin(whole, axisS - length / 2, length), asking: null });
	};

/** Shows `factor` times as much time, with what stands at `aroundS` staying where it is. */
export const zoom =
	(factor: number, aroundS: number): Command =>
	(state, dispatch) => {
		const { view, whole } = state;
		const length = clamp((view.toS - view.fromS) * factor, SHORTEST_VIEW_S, whole.toS - whole.fromS);
		if (Math.abs(length - (view.toS - view.fromS)) < 1e-9) return refuse(dispatch, factor < 1 ? 'This is as close as it gets.' : 'The whole session is shown.');
		const share = (aroundS - view.fromS) / (view.toS - view.fromS);
		return show(dispatch, { view: viewWithin(whole, aroundS - share * length, length) });
	};

/** Where zooming by key holds still: the cursor, when it is in sight. */
const zoomPoint = ({ cursorS, view }: EditorState): number => (cursorS >= view.fromS && cursorS <= view.toS ? cursorS : (view.fromS + view.toS) / 2);
export const zoomIn: Command = (state, dispatch) => zoom(1 / ZOOM_STEP, zoomPoint(state))(state, dispatch);
export const zoomOut: Command = (state, dispatch) => zoom(ZOOM_STEP, zoomPoint(state))(state, dispatch);

export const showWhole: Command = (state, dispatch) => {
	const { view, whole } = state;
	if (view.fromS === whole.fromS && view.toS === whole.toS) return refuse(dispatch, 'The whole session is shown.');
	return show(dispatch, { view: whole });
};

/** Shows the same length of time from here on, within the session. */
export const panTo =
	(fromS: number): Command =>
	(state, dispatch) => {
		const { view, whole } = state;
		const next = viewWithin(whole, fromS, view.toS - view.fromS);
		return next.fromS === view.fromS ? refuse(dispatch, 'The session ends here.') : show(dispatch, { view: next });
	};

/** Fits what is held to the view: the held tag with half of its length on either side. */
export const fitHeld: Command = (state, dispatch) => {
	const tag = heldTag(state);
	if (!tag) return refuse(dispatch, 'Hold a tag first, then F fits it to the view.');
	const span = spanOfTag(state, tag);
	const length = Math.max(20, (span.toS - span.fromS) * 2);
	const middle = (span.fromS + span.toS) / 2;
	return show(dispatch, { view: viewWithin(state.whole, middle - length / 2, length), cursorS: clamp(state.cursorS, span.fromS, span.toS) });
};

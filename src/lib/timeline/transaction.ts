/** What a command hands over: the parts of the state that change, and the name of the step when it is one to undo. */
import { recordStep } from './history';
import { wholeSpan, type EditorState } from './state';
import type { Change } from './step';

export interface Transaction {
	/** Parts that change. */
	patch: Partial<Omit<EditorState, 'document' | 'tracks' | 'said' | 'whole'>>;
	/** Set when the session itself changes. Null = nothing to undo: cursor, view, boxes. */
	step: { name: string; mergeKey: string | null; nameMerged?: (changes: Change[]) => string } | null;
	/** A sentence for the user. */
	say: string | null;
}

export type Dispatch = (transaction: Transaction) => void;

/**
 * One act of the user. With `dispatch` it acts, or says in a sentence why it does not; without, it answers 'could I?'.
 * Menus, keys, buttons and tests all use this one shape.
 */
export type Command = (state: EditorState, dispatch?: Dispatch) => boolean;

/** Hands over a change of what is seen. */
export function show(dispatch: Dispatch | undefined, patch: Transaction['patch'], say: string | null = null): true {
	dispatch?.({ patch, step: null, say });
	return true;
}

/** Hands over a change of the session itself, under the name that undo will show. */
export function change(
	dispatch: Dispatch | undefined,
	name: string,
	patch: Transaction['patch'],
	more: { say?: string; mergeKey?: string; nameMerged?: (changes: Change[]) => string } = {}
): true {
	dispatch?.({ patch, step: { name, mergeKey: more.mergeKey ?? null, nameMerged: more.nameMerged }, say: more.say ?? null });
	return true;
}

/** Says why nothing happens. */
export function refuse(dispatch: Dispatch | undefined, sentence: string): false {
	dispatch?.({ patch: {}, step: null, say: sentence });
	return false;
}

/**
 * The state after a transaction.
 *
 * @param atMs when it happened, ms; decides whether nudges become one step
 */
export function applyTransaction(state: EditorState, { patch, step, say }: Transaction, atMs: number): EditorState {
	let next: EditorState = { ...state, ...patch };
	if (say !== null) next = { ...next, said: { text: say, count: (state.said?.count ?? 0) + 1 } };
	else if (Object.keys(patch).length > 0) next = { ...next, said: null };
	if (step && !state.history.gesture) next = { ...next, history: recordStep(state, next, step, atMs) };
	// While a trace is dragged the ends of the session stay put under the hand.
	if (next.alignments !== state.alignments && !next.history.gesture) next = { ...next, whole: wholeSpan(next.document, next.tracks, next.alignments) };
	return next;
}

/** Begins a drag: what follows until `endGesture` is one step. */
export function beginGesture(state: EditorState): EditorState {
	return { ...state, history: { ...state.history, gesture: { alignments: state.alignments, tags: state.tags } } };
}

/** The state with everything put back to where the drag began; every move of a drag starts from here. */
export function gestureBase(state: EditorState): EditorState {
	return state.history.gesture ? { ...state, ...state.history.gesture } : state;
}

/** Ends a drag: keeps it as one step under a name, or puts everything back. */
export function endGesture(state: EditorState, name: string | null, atMs: number): EditorState {
	const { gesture } = state.history;
	if (!gesture) return state;
	const history = { ...state.history, gesture: null };
	if (name === null) return { ...state, ...gesture, history };
	const next = { ...state, history, whole: wholeSpan(state.document, state.tracks, state.alignments) };
	return { ...next, history: recordStep({ ...state, ...gesture }, next, { name, mergeKey: null }, atMs) };
}

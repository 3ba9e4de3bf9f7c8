import { describe, expect, it } from 'vitest';
import { alignment, after, estimate, session } from '../testing/session-in-hand';
import { applyTransaction, beginGesture, endGesture, gestureBase } from '../transaction';
import { alignmentOf, nudge, offsetObstacle, putAtPeak, setOffset, toggleLock } from './offset';
import { redo, undo } from './session';
import { holdTrace } from './trace';

const offsetOf = (state: ReturnType<typeof session>, id = 'wrenna') => alignmentOf(state, id).offsetS;

describe('nudging', () => {
	it('moves the held wearable alone, to the hundredth, and makes the offset a person’s', () => {
		const state = after(session({ alignments: { wrenna: alignment(3.4237), ostrel: alignment(0) } }), [nudge(0.1)]);
		expect(offsetOf(state)).toBe(3.52);
		expect(alignmentOf(state, 'wrenna').method).toBe('hand');
		expect(offsetOf(state, 'ostrel')).toBe(0);
	});

	it('ten nudges forth and ten back leave no dust of floating point', () => {
		const forth = Array.from({ length: 10 }, () => nudge(0.1));
		const back = Array.from({ length: 10 }, () => nudge(-0.1));
		expect(offsetOf(after(session(), [...forth, ...back]))).toBe(3);
	});

	it('a row of quick nudges is one undo step that names the whole way; a pause begins another', () => {
		const quick = after(session(), [nudge(0.1), nudge(0.1), nudge(1)], 200);
		expect(quick.history.done.map((s) => s.name)).toEqual(['offset 1 Wrenna +1.2 s']);
		expect(offsetOf(after(quick, [undo]))).toBe(3);
		expect(after(session(), [nudge(0.1), nudge(0.1)]).history.done).toHaveLength(2);
	});

	it('is refused with a reason on the reference, on a locked wearable, in review, and without a reference', () => {
		const refusal = (state: ReturnType<typeof session>) => {
			const tried = after(state, [nudge(0.1)]);
			expect(tried.alignments).toBe(state.alignments);
			return tried.said?.text;
		};
		expect(refusal(session({}, { heldNumber: 0 }))).toContain('is the axis');
		expect(refusal(session({ alignments: { wrenna: alignment(3, { locked: true }) } }))).toContain('Press L to unlock');
		expect(refusal(session({ state: 'in review', can: { ...session().document.can, align: false } }))).toContain('in review');
		const noReference = session();
		expect(refusal({ ...noReference, tracks: noReference.tracks.filter((t) => t.role === 'wearable') })).toContain('no reference');
	});
});

describe('the peak and the lock', () => {
	it('puts at the peak and counts as decided; a second press says that it is there', () => {
		const moved = after(session(), [nudge(10), putAtPeak]);
		expect(offsetOf(moved)).toBe(3);
		expect(alignmentOf(moved, 'wrenna').method).toBe('peak');
		expect(after(moved, [putAtPeak]).said?.text).toContain('stands at the peak');
	});

	it('says that there is no peak where nothing is determinable, with the reason, and moves nothing', () => {
		const state = session({ alignments: { wrenna: alignment(0, { estimate: { ...estimate(0, false), bestFitShiftS: null } }) } });
		const tried = after(state, [putAtPeak]);
		expect(tried.said?.text).toContain('no peak');
		expect(tried.said?.text).toContain('flat');
		expect(tried.alignments).toBe(state.alignments);
	});

	it('locking a proposed offset decides it', () => {
		const locked = after(session({ alignments: { wrenna: alignment(3, { estimate: estimate(3, false) }) } }), [toggleLock]);
		expect(alignmentOf(locked, 'wrenna')).toMatchObject({ locked: true, method: 'peak', offsetS: 3 });
		expect(offsetObstacle(locked, locked.tracks[1])).toContain('locked at +3.00 s');
		expect(after(locked, [toggleLock, nudge(0.1)]).alignments.wrenna).toMatchObject({ locked: false, offsetS: 3.1 });
	});
});

describe('dragging', () => {
	it('is one undo step however many moves it had; Esc puts it back', () => {
		const start = session();
		let state = beginGesture(start);
		for (const to of [3.5, 4.21, 5.004]) {
			const base = gestureBase(state);
			setOffset('wrenna', to)(base, (t) => (state = applyTransaction(base, t, 0)));
		}
		expect(offsetOf(state)).toBe(5);
		expect(state.history.done).toHaveLength(0);
		const kept = endGesture(state, 'offset 1 Wrenna +2 s', 0);
		expect(kept.history.done.map((s) => s.name)).toEqual(['offset 1 Wrenna +2 s']);
		expect(offsetOf(after(kept, [undo]))).toBe(3);
		expect(offsetOf(after(kept, [undo, redo]))).toBe(5);
		const dropped = endGesture(state, null, 0);
		expect(offsetOf(dropped)).toBe(3);
		expect(dropped.history.done).toHaveLength(0);
	});

	it('the ends of the session stay put under the hand and follow when it lets go', () => {
		let state = beginGesture(session());
		const base = gestureBase(state);
		setOffset('wrenna', 103)(base, (t) => (state = applyTransaction(base, t, 0)));
		expect(state.whole).toEqual(session().whole);
		expect(endGesture(state, 'x', 0).whole.toS).toBe(session().whole.toS + 100);
	});

	it('holds the trace that is dragged', () => {
		expect(after(session(), [holdTrace(0), setOffset('ostrel', 1)]).heldNumber).toBe(2);
	});
});

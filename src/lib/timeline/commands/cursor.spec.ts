import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { after, LENGTH_S, session, sinceStart, START_S, tag } from '../testing/session-in-hand';
import { COMMANDS } from './index';
import { goToTime, moveCursorTo, panTo, viewShowing, viewWithin, zoom } from './cursor';
import { holdTag } from './tag';

const run = (state: Parameters<typeof after>[0], ...names: (keyof typeof COMMANDS)[]) => after(state, names.map((n) => COMMANDS[n].command));

describe('cursor', () => {
	it('moves by 1 s and 10 s, and one back is where it was', () => {
		const start = session();
		expect(run(start, 'cursorForward').cursorS - start.cursorS).toBe(1);
		expect(run(start, 'cursorForwardFar', 'cursorBackFar', 'cursorForward', 'cursorBack').cursorS).toBe(start.cursorS);
	});

	it('stays at the ends and says so, instead of leaving the session', () => {
		const end = run(session(), 'goToEnd');
		const beyond = run(end, 'cursorForward');
		expect(beyond.cursorS).toBe(end.cursorS);
		expect(beyond.said?.text).toContain('end of the session');
	});

	it('takes the view along when it leaves it', () => {
		const near = after(session(), [zoom(0.1, START_S + 300), moveCursorTo(START_S + 20)]);
		expect(near.view.fromS).toBeLessThanOrEqual(START_S + 20);
		expect(near.view.toS - near.view.fromS).toBeCloseTo(60, 0);
	});

	it('goes to a time that lies in the session and refuses one that does not, in words', () => {
		expect(sinceStart(after(session(), [goToTime(START_S + 125)]).cursorS)).toBe(125);
		const refused = after(session(), [goToTime(START_S + 5000)]);
		expect(refused.said?.text).toContain('outside');
		expect(refused.cursorS).toBe(session().cursorS);
	});
});

describe('view', () => {
	it('zooms about the cursor when it is in sight: what stands under it stays there', () => {
		const state = after(session(), [moveCursorTo(START_S + 150)]);
		const share = (s: typeof state) => (s.cursorS - s.view.fromS) / (s.view.toS - s.view.fromS);
		expect(share(run(state, 'zoomIn'))).toBeCloseTo(share(state), 9);
	});

	it('never shows less than 5 s nor more than the session, and says when it is at either end', () => {
		let state = session();
		for (let i = 0; i < 30; i++) state = run(state, 'zoomIn');
		expect(state.view.toS - state.view.fromS).toBeCloseTo(5, 9);
		expect(state.said?.text).toContain('close');
		for (let i = 0; i < 30; i++) state = run(state, 'zoomOut');
		expect(state.view).toEqual(state.whole);
	});

	it('fits a held tag with room on either side', () => {
		const state = after(session({ tags: [tag('a', 100, 160)] }), [holdTag('a'), COMMANDS.fitHeld.command]);
		// The wearable's clock is 3 s behind: the tag stands at 103 to 163 on the axis.
		expect(sinceStart(state.view.fromS)).toBe(73);
		expect(sinceStart(state.view.toS)).toBe(193);
	});

	it('is always within the session and holds the moment asked for', () => {
		const state = session();
		fc.assert(
			fc.property(fc.double({ min: -50, max: LENGTH_S + 50, noNaN: true }), fc.double({ min: 0.1, max: 5000, noNaN: true }), fc.double({ min: 0, max: LENGTH_S, noNaN: true }), (from, length, moment) => {
				const view = viewWithin(state.whole, START_S + from, length);
				expect(view.fromS).toBeGreaterThanOrEqual(state.whole.fromS);
				expect(view.toS).toBeLessThanOrEqual(state.whole.toS + 1e-6);
				const shown = viewShowing({ ...state, view }, START_S + moment);
				expect(START_S + moment).toBeGreaterThanOrEqual(shown.fromS - 1e-6);
				expect(START_S + moment).toBeLessThanOrEqual(shown.toS + 1e-6);
			})
		);
	});

	it('turns by one view and back; panning past the end says so', () => {
		const near = after(session(), [zoom(0.2, START_S + 300)]);
		const on = run(near, 'viewForward');
		expect(on.view.fromS).toBeCloseTo(near.view.toS, 6);
		expect(run(on, 'viewBack').view.fromS).toBeCloseTo(near.view.fromS, 6);
		expect(after(run(near, 'showWhole'), [panTo(START_S + 900)]).said?.text).toContain('ends here');
	});
});

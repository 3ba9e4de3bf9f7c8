import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { draggedOffsetS, Travel } from './offset-drag';

const onRule = { startS: 3, secondsPerPx: 1 / 252, peakS: 3.42 };

describe('dragging the offset', () => {
	it('follows the pointer one to one away from the peak', () => {
		expect(draggedOffsetS(onRule, 25.2, true)).toBeCloseTo(3.1, 9);
		expect(draggedOffsetS({ ...onRule, secondsPerPx: 600 / 796 }, 10, true)).toBeCloseTo(3 + 6000 / 796, 9);
	});

	it('rests at the peak for 0.08 s of travel', () => {
		for (const raw of [3.381, 3.4, 3.42, 3.44, 3.459]) expect(draggedOffsetS(onRule, (raw - 3) * 252, true)).toBe(3.42);
		expect(draggedOffsetS(onRule, (3.47 - 3) * 252, true)).not.toBe(3.42);
	});

	it('neither rests nor bends with Alt, nor where no peak is known', () => {
		expect(draggedOffsetS(onRule, 0.41 * 252, false)).toBeCloseTo(3.41, 9);
		expect(draggedOffsetS({ ...onRule, peakS: null }, 0.41 * 252, true)).toBeCloseTo(3.41, 9);
	});

	it('never jumps or turns back on the way through the peak', () => {
		fc.assert(
			fc.property(fc.double({ min: 0, max: 0.9, noNaN: true }), fc.double({ min: 0, max: 0.01, noNaN: true }), (s, step) => {
				const a = draggedOffsetS(onRule, s * 252, true);
				const b = draggedOffsetS(onRule, (s + step) * 252, true);
				expect(b - a).toBeGreaterThanOrEqual(-1e-9);
				expect(b - a).toBeLessThanOrEqual(step * 1.37 + 1e-9);
			})
		);
	});

	it('can hit the peak exactly on the plot, where one pixel is most of a second', () => {
		const onPlot = { startS: 0, secondsPerPx: 0.75, peakS: 3.42 };
		expect([3, 4, 5, 6].map((px) => draggedOffsetS(onPlot, px, true))).toContain(3.42);
	});

	it('does not jump when Shift is pressed or let go in the middle of a drag', () => {
		const travel = new Travel(100);
		expect(travel.to(110, false)).toBeCloseTo(10);
		expect(travel.to(120, true)).toBeCloseTo(11);
		expect(travel.to(130, false)).toBeCloseTo(21);
	});
});

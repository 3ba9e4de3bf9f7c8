import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { cumulativeErrorShare, errorsByZone, hexDensity } from './plot-columns';

const pairs = (reference: number[], wearable: number[]) => ({
	reference: Float64Array.from(reference),
	wearable: Float64Array.from(wearable)
});

describe('density', () => {
	it('loses no reading, and puts each into the nearest cell', () => {
		fc.assert(
			fc.property(
				fc.array(
					fc.tuple(fc.double({ min: 30, max: 220, noNaN: true }), fc.double({ min: 0, max: 220, noNaN: true })),
					{ minLength: 1, maxLength: 60 }
				),
				(list) => {
					const group = pairs(
						list.map((v) => v[0]),
						list.map((v) => v[1])
					);
					for (const kind of ['scatter', 'difference'] as const) {
						const cells = hexDensity([group], kind, 2);
						expect(cells.count.reduce((a, b) => a + b, 0)).toBe(list.length);
						expect(cells.most).toBe(Math.max(...cells.count));
						for (const [x, y] of list) {
							const at = kind === 'scatter' ? [x, y] : [(x + y) / 2, y - x];
							const nearest = Math.min(...[...cells.x].map((cx, i) => Math.hypot(cx - at[0], cells.y[i] - at[1])));
							// No point of a hexagon is farther from its centre than a corner: size / √3.
							expect(nearest).toBeLessThanOrEqual(2 / Math.sqrt(3) + 1e-9);
						}
					}
				}
			)
		);
	});
});

describe('cumulative share of errors', () => {
	it('counts a reading that is off by exactly a step at that step', () => {
		expect([...cumulativeErrorShare([pairs([100, 100, 100, 100], [100, 101, 95, 140])], 1, 5)]).toEqual([
			0.25, 0.5, 0.5, 0.5, 0.5, 0.75
		]);
	});
	it('is 0 everywhere without readings', () => expect([...cumulativeErrorShare([], 1, 2)]).toEqual([0, 0, 0]));
});

describe('errors by zone', () => {
	it('every reading stands in one zone, the edge in the upper one', () => {
		const zones = errorsByZone([pairs([99, 100, 119, 120], [100, 102, 119, 110])], [-Infinity, 100, 120, Infinity]);
		expect(zones.map((z) => [z.n, z.bias, z.mae])).toEqual([
			[1, 1, 1],
			[2, 1, 1],
			[1, -10, 10]
		]);
	});
});

import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { placeEndLabels } from './end-labels';

const named = (ys: number[]) => ys.map((lineY, number) => ({ number, name: `trace ${number}`, lineY }));

describe('end labels', () => {
	it('stand at their lines where there is room', () => {
		expect(placeEndLabels(named([40, 100, 200]), 300).map((l) => l.labelY)).toEqual([40, 100, 200]);
	});

	it('stand 19 px apart around lines that end together', () => {
		expect(placeEndLabels(named([100, 100, 100]), 300).map((l) => l.labelY)).toEqual([81, 100, 119]);
	});

	it('never overlap, keep the order of the lines, and stay in the plot', () => {
		fc.assert(
			fc.property(fc.array(fc.double({ min: 0, max: 300, noNaN: true }), { minLength: 1, maxLength: 7 }), (ys) => {
				const placed = placeEndLabels(named(ys), 300);
				for (let i = 1; i < placed.length; i++) {
					expect(placed[i].labelY - placed[i - 1].labelY).toBeGreaterThanOrEqual(19 - 1e-9);
					expect(placed[i].lineY).toBeGreaterThanOrEqual(placed[i - 1].lineY);
				}
				expect(placed[0].labelY).toBeGreaterThanOrEqual(9.5 - 1e-9);
				expect(placed.at(-1)!.labelY).toBeLessThanOrEqual(300 - 9.5 + 1e-9);
			})
		);
	});
});

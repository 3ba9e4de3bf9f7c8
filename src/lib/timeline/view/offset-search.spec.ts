import { describe, expect, it } from 'vitest';
import { curveCentres } from './offset-search.svelte';

describe('when the correlation curves are asked for again', () => {
	it('stands round the peak while the offset is within its reach, and round the offset far away from it', () => {
		expect(curveCentres(10, 3.42, null)).toEqual({ wideAtS: 3.42, nearAtS: 10 });
		expect(curveCentres(-3600, 3.42, null)).toEqual({ wideAtS: -3600, nearAtS: -3600 });
	});

	it('leaves the curves alone for small nudges, and asks anew only for the near one after a larger one', () => {
		const known = { wideAtS: 3.42, nearAtS: 3.42 };
		expect(curveCentres(3.52, 3.42, known)).toEqual(known);
		expect(curveCentres(6.42, 3.42, known)).toEqual({ wideAtS: 3.42, nearAtS: 6.42 });
	});

	it('keeps a curve without a peak in place until the offset nears its end', () => {
		const known = { wideAtS: 0, nearAtS: 0 };
		expect(curveCentres(20, null, known).wideAtS).toBe(0);
		expect(curveCentres(30, null, known).wideAtS).toBe(30);
	});

	it('shows where the recordings would overlap when nothing overlaps at the offset', () => {
		const lost = { wideAtS: 0, nearAtS: 0, empty: true };
		expect(curveCentres(0, 7200.86, lost)).toEqual({ wideAtS: 7200.86, nearAtS: 0 });
		expect(curveCentres(0.1, 7200.86, { wideAtS: 7200.86, nearAtS: 0, empty: false }).wideAtS).toBe(7200.86);
	});
});

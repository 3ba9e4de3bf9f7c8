import { describe, expect, it } from 'vitest';
import { stands } from './stands';

const cadence = (entries: [number, number][]) => ({ tS: Float64Array.from(entries, (e) => e[0]), value: Float64Array.from(entries, (e) => e[1]), gapS: 3 });
const run = (from: number, to: number, value: number): [number, number][] => Array.from({ length: to - from }, (_, i) => [from + i, value]);

describe('where the wearer stands', () => {
	it('is named where cadence is zero or missing for a while between two stretches of movement', () => {
		expect(stands(cadence([...run(0, 30, 160), ...run(30, 50, 0), ...run(50, 60, 160)]))).toEqual([{ startS: 30, endS: 50 }]);
		expect(stands(cadence([...run(0, 30, 160), ...run(50, 60, 160)]))).toEqual([{ startS: 29, endS: 50 }]);
	});

	it('is not claimed for a short stop, nor before the first and after the last reading', () => {
		expect(stands(cadence([...run(0, 30, 160), ...run(30, 34, 0), ...run(34, 60, 160), ...run(60, 90, 0)]))).toEqual([]);
		expect(stands(cadence([]))).toEqual([]);
	});
});

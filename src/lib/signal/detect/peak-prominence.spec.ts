import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { localMaxima, peakProminence, prominentPeaks } from './peak-prominence';

describe('peak prominence', () => {
	// prettier-ignore
	const INPUT = [
		100, 102, 103, 105, 107, 110, 111, 112, 113, 115, 117, 116, 117, 118, 118, 118, 117, 118, 117, 118, 117, 116,
		116, 115, 115, 113, 113, 112, 112, 111, 110, 111, 111, 111, 113, 112, 112, 113, 114, 115, 116, 117, 118, 118,
		120, 121, 121, 123, 123, 124, 124, 125, 124, 125, 123, 123, 124, 122, 122, 120, 120, 118, 117, 115, 112, 112,
		110, 108, 106, 104, 102, 101, 99, 98, 96, 95, 93, 94, 92, 93, 92, 91, 91, 91, 91, 91, 92, 91, 92, 94, 93, 93,
		94, 95, 94, 94, 94, 93, 94, 93, 93, 92, 91, 90, 89, 87, 86, 86, 83, 82, 81, 79, 78, 77, 76, 75, 74, 74, 73,
		73, 72, 71, 73, 73, 73, 74, 76, 77, 78, 78, 81, 81, 84, 85, 87, 89, 90, 90, 91, 94, 94, 96, 97, 96, 97, 99,
		99, 99, 99, 98, 98, 98, 98, 97, 98, 97, 97, 96, 96, 96, 96, 96, 96, 97, 98, 99, 98, 101, 101, 102, 103, 105,
		107, 109, 110, 112, 115, 116, 116, 118, 119, 120, 123, 125, 125, 125, 126, 127, 127, 127, 127, 126, 126, 125,
		124, 123, 122, 121, 121, 118, 117, 116, 114, 115, 114, 112, 112, 111, 108, 110, 109, 109, 108, 109, 109, 110,
		110, 110, 112, 111, 112, 111, 114, 114, 114, 114, 114, 114, 113, 113, 112, 113, 111, 110, 108, 107, 107, 104,
		102, 100, 98, 97, 95, 93, 91, 89, 88, 85, 84, 82, 82, 80, 80, 80, 78, 78, 78, 78, 78, 79, 80, 80, 80, 81, 82,
		82, 83, 85, 85, 87, 87, 87, 88, 89, 88, 88, 87, 88, 88, 88, 86, 85, 85, 84, 83, 83, 82, 81, 80, 80, 79, 79,
		79, 79, 78, 77, 79, 78, 79, 81, 82, 83, 84, 86, 87, 90, 93, 93, 95, 96, 99, 101, 102, 104, 105, 108, 109, 111,
		111, 112, 112, 113, 113, 113, 113, 114, 113, 113, 113, 111, 111, 111, 111, 110, 110, 110, 108, 108, 109, 109,
		108, 110, 110, 111, 111, 112, 113, 116, 115, 117, 117, 119, 119, 121, 123, 123, 125, 125, 125, 126, 126, 127,
		126, 126, 126, 125, 124, 124, 123, 120, 120, 118, 116, 116, 113, 113, 110, 109, 106, 105, 104, 102, 101, 100,
		98, 98, 97, 97, 96, 96, 95, 97, 96, 96, 97, 98, 97, 97, 98, 98
	];

	test('is what scipy 1.10.1 signal.find_peaks(x, prominence=10) gives', () => {
		const peaks = prominentPeaks(Float64Array.from(INPUT), 10);
		expect(peaks.map((p) => p.at)).toEqual([51, 53, 188, 273, 361]);
		expect(peaks.map((p) => p.prominence)).toEqual([25.0, 25.0, 50.0, 11.0, 32.0]);
	});

	test('is what walking to the next higher value on either side gives', () => {
		fc.assert(
			fc.property(fc.array(fc.integer({ min: 40, max: 60 }), { maxLength: 80 }), (value) => {
				const peaks = localMaxima(value);
				const walked = peaks.map((peak) => {
					const lowest = [-1, 1].map((step) => {
						let low = value[peak];
						for (let i = peak; i >= 0 && i < value.length && value[i] <= value[peak]; i += step) low = Math.min(low, value[i]);
						return low;
					});
					return value[peak] - Math.max(...lowest);
				});
				expect([...peakProminence(value, peaks)]).toEqual(walked);
			})
		);
	});

	test('a flat trace, a trace of one value and none have no peaks', () => {
		for (const value of [[], [80], [80, 80, 80], [NaN, NaN]]) expect(prominentPeaks(Float64Array.from(value), 1)).toEqual([]);
	});

	test('a gap is stepped over and indices stay those of the trace', () => {
		expect(prominentPeaks(Float64Array.from([80, NaN, 90, NaN, NaN, 82]), 5)).toEqual([{ at: 2, height: 90, prominence: 8 }]);
	});
});

import { describe, expect, it } from 'vitest';
import { differenceLine, valueAtCursor } from './difference';

const line = (startS: number, values: number[]) => ({ tS: Float64Array.from(values, (_, i) => startS + i), value: Float64Array.from(values), gapS: 3 });

describe('the difference strip', () => {
	it('is wearable minus reference at the same moment of the reference clock, up when the wearable reads high', () => {
		const reference = line(1000, [100, 110, 120, 130]);
		const wearable = line(995, [100, 110, 120, 135]);
		const { value, tS } = differenceLine(wearable, reference, { offsetS: 5, driftPpm: 0 }, 995);
		expect([...value]).toEqual([0, 0, 0, 5]);
		expect(tS[0]).toBe(995);
	});

	it('reads the reference between its stamps when the offset is a fraction', () => {
		const { value } = differenceLine(line(1000, [100, 100]), line(1000, [100, 110, 120]), { offsetS: 0.5, driftPpm: 0 }, 1000);
		expect([...value]).toEqual([-5, -15]);
	});

	it('is nothing where the reference has a gap or has not begun', () => {
		const reference = { tS: Float64Array.from([1000, 1001, 1010, 1011]), value: Float64Array.from([100, 100, 100, 100]), gapS: 3 };
		const { value } = differenceLine(line(998, [100, 100, 101, 102, 103, 104]), reference, { offsetS: 0, driftPpm: 0 }, 998);
		expect([...value]).toEqual([NaN, NaN, 1, 2, NaN, NaN]);
	});

	it('agrees with the value shown at the cursor', () => {
		const reference = line(1000, [100, 110, 120, 130]);
		const wearable = line(995, [100, 110, 120, 135]);
		expect(valueAtCursor(1003, { heartRate: wearable, firstS: 995 }, { offsetS: 5, driftPpm: 0 }, reference)).toEqual({ bpm: 135, differenceBpm: 5 });
		expect(valueAtCursor(1003, { heartRate: wearable, firstS: 995 }, { offsetS: 5, driftPpm: 0 }, null)).toEqual({ bpm: 135, differenceBpm: null });
	});
});

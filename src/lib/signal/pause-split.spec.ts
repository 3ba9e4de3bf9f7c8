import { describe, expect, test } from 'vitest';
import type { Trace } from '../formats/recording';
import { simulateSession, type Activity } from '../simulate';
import { estimateBestFitShift, estimateInParts } from './estimate-shift';

/** The trace of a device that wrote nothing between two times and went on as if they were one. */
function withoutTime(trace: Trace, fromS: number, lengthS: number): Trace {
	const kept = Array.from(trace.tS.keys()).filter((i) => trace.tS[i] < fromS || trace.tS[i] >= fromS + lengthS);
	return { kind: trace.kind, tS: Float64Array.from(kept, (i) => (trace.tS[i] < fromS ? trace.tS[i] : trace.tS[i] - lengthS)), value: Float64Array.from(kept, (i) => trace.value[i]) };
}

const session = (activity: Activity, seed: number) => simulateSession({ seed, activity, durationS: 3000, preset: 'lag', wearables: [{ irregular: false }] });
const ACTIVITIES: Activity[] = ['run-intervals', 'strength', 'commute', 'hill-run'];

describe('a device that stops its clock in a pause', () => {
	test.each(ACTIVITIES)('%s: the recording is split at the pause and both parts stand where they belong', (activity) => {
		const { reference, wearables } = session(activity, 81_000);
		const [{ heartRate, truth }] = wearables;
		const pauseS = heartRate.tS[0] + 1500;
		const { estimate, parts } = estimateInParts(reference.heartRate, withoutTime(heartRate, pauseS, 95));
		expect(estimate).toMatchObject({ reliable: false, reasonCode: 'paused-clock' });
		expect(estimate.reason).toContain('wearable left out paused time');
		expect(parts).toHaveLength(2);
		const [before, after] = (parts ?? []).map((part) => part.estimate.bestFitShiftS as number);
		expect(Math.abs(before - truth.totalShiftS)).toBeLessThan(3);
		expect(Math.abs(after - (truth.totalShiftS + 95))).toBeLessThan(3);
		expect(Math.abs((parts ?? [])[1].fromS - pauseS)).toBeLessThan(60);
	});

	test('when the reference stops its clock, that is what is said', () => {
		const { reference, wearables } = session('run-intervals', 82_000);
		const { estimate } = estimateInParts(withoutTime(reference.heartRate, reference.heartRate.tS[0] + 1400, 120), wearables[0].heartRate);
		expect(estimate.reason).toContain('reference left out paused time');
	});

	test('a recording whose clock runs through is never split', () => {
		for (let i = 0; i < 24; i++) {
			const { reference, wearables } = simulateSession({ seed: 83_000 + i, activity: ACTIVITIES[i % 4], durationS: 2400, preset: i % 2 ? 'typical' : 'heavy' });
			expect(estimateInParts(reference.heartRate, wearables[0].heartRate).parts, `session ${i}`).toBeNull();
		}
	});

	test('a wearable that is wrong for its last quarter is not taken for a paused clock', () => {
		const { reference, wearables } = session('run-intervals', 84_000);
		const { tS, value } = wearables[0].heartRate;
		const spoilt = value.map((v, i) => (i > 0.75 * value.length ? 96 + (i % 5) : v));
		expect(estimateInParts(reference.heartRate, { tS, value: spoilt }).parts).toBeNull();
		expect(Math.abs((estimateBestFitShift(reference.heartRate, { tS, value: spoilt }).bestFitShiftS as number) - wearables[0].truth.totalShiftS)).toBeLessThan(2);
	});
});

import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import type { Trace } from '../formats/recording';
import { NO_FAULTS, simulateSession, type Activity } from '../simulate';
import { estimateBestFitShift } from './estimate-shift';

const moved = (trace: Trace, byS: number): Trace => ({ ...trace, tS: trace.tS.map((t) => t + byS) });
const scaled = (trace: Trace, by: number): Trace => ({ ...trace, value: trace.value.map((v) => v * by) });
const intervals = simulateSession({ seed: 4, activity: 'run-intervals', durationS: 1800, preset: 'lag' });

describe('best-fit shift', () => {
	test('a recording against itself moved by a known time comes back to it within a tenth of a second', () => {
		const strap = intervals.reference.heartRate;
		fc.assert(
			fc.property(fc.integer({ min: -50_000, max: 50_000 }), (byS) => {
				const found = estimateBestFitShift(strap, moved(strap, -byS));
				expect(found.bestFitShiftS).not.toBeNull();
				expect(Math.abs((found.bestFitShiftS as number) - byS)).toBeLessThan(0.1);
				expect(found.reliable).toBe(true);
			}),
			{ numRuns: 12, seed: 1 }
		);
	});

	test('moving the wearable by k moves the answer by k, and nothing else', () => {
		const { heartRate } = intervals.wearables[0];
		const at = estimateBestFitShift(intervals.reference.heartRate, heartRate);
		for (const k of [-7200, -5, 1, 3600]) {
			const then = estimateBestFitShift(intervals.reference.heartRate, moved(heartRate, k));
			expect((then.bestFitShiftS as number) + k).toBeCloseTo(at.bestFitShiftS as number, 1);
			expect(then.reliable).toBe(at.reliable);
		}
	});

	test('swapping roles turns the sign for traces that smooth alike', () => {
		const session = simulateSession({ seed: 8, activity: 'hill-run', durationS: 2400, preset: 'none', wearables: [{ clockOffsetS: 37 }] });
		const forth = estimateBestFitShift(session.reference.heartRate, session.wearables[0].heartRate);
		const back = estimateBestFitShift(session.wearables[0].heartRate, session.reference.heartRate);
		expect(Math.abs((forth.bestFitShiftS as number) + (back.bestFitShiftS as number))).toBeLessThan(1);
	});

	test('a wearable that reads 3 % high is placed where it belongs', () => {
		const { heartRate } = intervals.wearables[0];
		const plain = estimateBestFitShift(intervals.reference.heartRate, heartRate);
		const high = estimateBestFitShift(intervals.reference.heartRate, scaled(heartRate, 1.03));
		expect(Math.abs((high.bestFitShiftS as number) - (plain.bestFitShiftS as number))).toBeLessThan(0.5);
	});

	test('a zone mistake is named in words', () => {
		const session = simulateSession({ seed: 15, activity: 'run-intervals', durationS: 1800, preset: 'lag', wearables: [{ clockOffsetS: 7203 }] });
		const found = estimateBestFitShift(session.reference.heartRate, session.wearables[0].heartRate);
		expect(found.reliable).toBe(true);
		expect(found.reason).toContain('whole-hour mistake of +2 h');
	});

	test('too little data is not determinable, with the remedy', () => {
		const short = { ...intervals.wearables[0].heartRate, tS: intervals.wearables[0].heartRate.tS.slice(0, 20), value: intervals.wearables[0].heartRate.value.slice(0, 20) };
		const found = estimateBestFitShift(intervals.reference.heartRate, short);
		expect(found).toMatchObject({ bestFitShiftS: null, ci95: null, reliable: false, reasonCode: 'too-short', candidates: [] });
		expect(found.reason).toMatch(/Not determinable.*by hand/);
		expect(estimateBestFitShift({ tS: new Float64Array(0), value: new Float64Array(0) }, short).bestFitShiftS).toBeNull();
	});

	test('constant heart rate is never called reliable', () => {
		const flat = { tS: Float64Array.from({ length: 1800 }, (_, i) => i), value: new Float64Array(1800).fill(120) };
		expect(estimateBestFitShift(flat, moved({ kind: 'heartRate', ...flat }, 100)).reliable).toBe(false);
	});

	test('two different sessions are never called reliable', () => {
		const activities: Activity[] = ['run-intervals', 'ride-outdoor', 'strength', 'walk', 'run-steady'];
		for (let i = 0; i < 20; i++) {
			const a = simulateSession({ seed: 100 + i, activity: activities[i % 5], durationS: 2000 });
			const b = simulateSession({ seed: 900 + i, activity: activities[(i + (i % 2)) % 5], durationS: 2000 });
			expect(estimateBestFitShift(a.reference.heartRate, b.wearables[0].heartRate).reliable, `pair ${i}`).toBe(false);
		}
	});

	test('wearables with ordinary faults stand within the stated interval and are not placed wrong', () => {
		const activities: Activity[] = ['run-intervals', 'ride-outdoor', 'strength', 'hiit', 'commute', 'hill-run'];
		let inside = 0;
		let accepted = 0;
		const errors: number[] = [];
		for (let i = 0; i < 36; i++) {
			const session = simulateSession({ seed: 40_000 + i, activity: activities[i % 6], durationS: 1800 });
			const { truth, heartRate } = session.wearables[0];
			const found = estimateBestFitShift(session.reference.heartRate, heartRate);
			const error = Math.abs((found.bestFitShiftS as number) - truth.totalShiftS);
			errors.push(error);
			if (found.reliable) {
				accepted++;
				expect(error, `session ${i}`).toBeLessThan(5);
			}
			if (found.ci95 && found.ci95[0] <= truth.totalShiftS && truth.totalShiftS <= found.ci95[1]) inside++;
		}
		errors.sort((a, b) => a - b);
		expect(errors[18]).toBeLessThan(0.35);
		expect(errors[32]).toBeLessThan(1.2);
		expect(accepted).toBeGreaterThanOrEqual(31);
		expect(inside).toBeGreaterThanOrEqual(32);
	});

	test('a lag-free wearable in simulated sessions without faults: the clock itself is found, less the strap’s own lag', () => {
		const session = simulateSession({ seed: 77, activity: 'strength', durationS: 2400, preset: 'none', wearables: [{ clockOffsetS: 12, faults: NO_FAULTS, driftPpm: 0 }] });
		const found = estimateBestFitShift(session.reference.heartRate, session.wearables[0].heartRate);
		expect(Math.abs((found.bestFitShiftS as number) - (12 + session.reference.delayS))).toBeLessThan(0.3);
	});
});

import { describe, expect, test } from 'vitest';
import { ACTIVITIES, simulateSession, type WearableCharacter } from './index';
import { NO_FAULTS } from './faults';

const plain: Partial<WearableCharacter> = { tauS: 0, windowS: 0, delayS: 0, noiseSdBpm: 0.3, faults: NO_FAULTS, driftPpm: 0, irregular: false };

describe('simulated sessions', () => {
	test('are the same for the same request, so that a demo and a finding can be made again', () => {
		const a = simulateSession({ seed: 11, activity: 'hill-run', wearables: 2 });
		const b = simulateSession({ seed: 11, activity: 'hill-run', wearables: 2 });
		expect(a).toEqual(b);
		expect(simulateSession({ seed: 12, activity: 'hill-run' }).reference.heartRate.value).not.toEqual(a.reference.heartRate.value);
	});

	test.each(ACTIVITIES)('%s: whole seconds, strictly rising, whole bpm a body can have', (activity) => {
		const session = simulateSession({ seed: 3, activity, wearables: 2 });
		for (const { tS, value } of [session.reference.heartRate, ...session.wearables.map((w) => w.heartRate)]) {
			expect(tS.length).toBe(value.length);
			expect(tS.length).toBeGreaterThan(100);
			for (let i = 0; i < tS.length; i++) {
				expect(Number.isInteger(tS[i]) && Number.isInteger(value[i])).toBe(true);
				if (i) expect(tS[i]).toBeGreaterThan(tS[i - 1]);
				expect(value[i]).toBeGreaterThanOrEqual(20);
				expect(value[i]).toBeLessThanOrEqual(240);
			}
		}
	});

	test('adding the clock offset puts a wearable without lag where the heart is', () => {
		for (const clockOffsetS of [-420, 3.42, 5400]) {
			const session = simulateSession({ seed: 5, activity: 'run-intervals', durationS: 1800, preset: 'none', referenceFault: false, wearables: [{ ...plain, clockOffsetS }] });
			const { tS, value } = session.wearables[0].heartRate;
			const error = (offsetS: number) => {
				let sum = 0;
				for (let i = 60; i < tS.length; i++) {
					const x = (tS[i] + offsetS - session.startS) * 4;
					sum += (value[i] - session.truth.heartRateBpm[Math.min(session.truth.n - 1, Math.max(0, Math.round(x)))]) ** 2;
				}
				return sum;
			};
			expect(error(clockOffsetS)).toBeLessThan(error(clockOffsetS - 1));
			expect(error(clockOffsetS)).toBeLessThan(error(clockOffsetS + 1));
		}
	});

	test('a device that smooths stands late by the sum of its delays, and the shift of least squares is near', () => {
		const session = simulateSession({ seed: 9, activity: 'run-intervals', durationS: 3000, preset: 'none', wearables: [{ ...plain, tauS: 4, windowS: 6, delayS: 1, clockOffsetS: 10 }] });
		const { truth } = session.wearables[0];
		// On a grid of 0.25 s the smoothers are a quarter of a second quicker than tau and half the window say.
		expect(Math.abs(truth.responseLagS - (4 + 3 + 1 - session.reference.delayS))).toBeLessThan(0.26);
		expect(truth.totalShiftS).toBeCloseTo(10 - truth.responseLagS, 9);
		expect(Math.abs(truth.bestFitShiftS - truth.totalShiftS)).toBeLessThan(1);
	});

	test('the strap displays its value two to three seconds late, and its beats are where the heart beats', () => {
		const session = simulateSession({ seed: 21, activity: 'run-intervals', durationS: 1800, preset: 'none' });
		expect(session.reference.delayS).toBeGreaterThan(1.8);
		expect(session.reference.delayS).toBeLessThan(3.2);
		const { tS, value } = session.reference.rrInterval;
		const total = value.reduce((a, b) => a + b, 0) / 1000;
		expect(Math.abs(tS[tS.length - 1] - tS[0] - (total - value[0] / 1000))).toBeLessThan(1);
	});

	test('faults come with typical and heavy, not without', () => {
		const faults = (preset: 'none' | 'typical' | 'heavy') =>
			Array.from({ length: 12 }, (_, seed) => simulateSession({ seed, activity: 'run-intervals', durationS: 1800, preset }).wearables[0].truth.events.length).reduce((a, b) => a + b, 0);
		expect(faults('none')).toBe(0);
		expect(faults('typical')).toBeGreaterThan(5);
		expect(faults('heavy')).toBeGreaterThan(faults('typical'));
	});
});

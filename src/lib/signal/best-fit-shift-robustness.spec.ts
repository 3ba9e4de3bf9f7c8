import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import type { Trace } from '../formats/recording';
import { NO_FAULTS, randomStream, simulateSession } from '../simulate';
import { estimateBestFitShift } from './estimate-shift';
import type { ShiftEstimate } from './shift';

type Values = Pick<Trace, 'tS' | 'value'>;
const moved = (trace: Values, byS: number): Values => ({ tS: trace.tS.map((t) => t + byS), value: trace.value });
const kept = (trace: Values, keep: (tS: number, index: number) => boolean): Values => {
	const stays = Array.from(trace.tS, keep);
	return { tS: trace.tS.filter((_, i) => stays[i]), value: trace.value.filter((_, i) => stays[i]) };
};

function expectSound(found: ShiftEstimate) {
	const numbers = [found.bestFitShiftS, ...(found.ci95 ?? []), ...found.candidates.flatMap((c) => [c.shiftS, c.score])];
	for (const n of numbers) expect(n === null || Number.isFinite(n)).toBe(true);
	expect((found.bestFitShiftS === null) === (found.ci95 === null)).toBe(true);
	expect(found.candidates.length).toBeLessThanOrEqual(6);
	expect(found.reason.length).toBeGreaterThan(20);
	if (found.bestFitShiftS !== null && found.ci95) {
		expect(found.ci95[0]).toBeLessThan(found.bestFitShiftS);
		expect(found.ci95[1]).toBeGreaterThan(found.bestFitShiftS);
	}
}

describe('best-fit shift of odd data', () => {
	test('whatever two traces hold, every figure is a number or absent, never NaN', () => {
		const trace = fc
			.record({
				seed: fc.integer(),
				n: fc.integer({ min: 0, max: 700 }),
				step: fc.constantFrom(0.25, 1, 3.7, 9, 11, 60),
				startS: fc.constantFrom(0, 0.4, 1_700_000_000, -5_000_000_000),
				way: fc.constantFrom('constant', 'noise', 'wave', 'two-valued', 'impossible')
			})
			.map(({ seed, n, step, startS, way }): Values => {
				const random = randomStream(seed, 'odd');
				return {
					tS: Float64Array.from({ length: n }, (_, i) => startS + i * step),
					value: Float64Array.from({ length: n }, (_, i) =>
						way === 'constant' ? 120 : way === 'noise' ? random.uniform(40, 200) : way === 'wave' ? 120 + 30 * Math.sin(i / 40) : way === 'two-valued' ? random.pick([60, 180]) : random.pick([5, 900, NaN, 130])
					)
				};
			});
		fc.assert(
			fc.property(trace, trace, (a, b) => {
				const found = estimateBestFitShift(a, b);
				expectSound(found);
			}),
			{ numRuns: 30, seed: 3 }
		);
	});

	test('noise and pure waves, which fit at many shifts, are never called reliable', () => {
		const tS = Float64Array.from({ length: 2400 }, (_, i) => i);
		const wave = { tS, value: Float64Array.from(tS, (t) => 130 + 25 * Math.sin(t / 30)) };
		expect(estimateBestFitShift(wave, moved(wave, 40)).reliable).toBe(false);
		const noise = (name: string) => {
			const random = randomStream(1, name);
			return { tS, value: Float64Array.from(tS, () => Math.round(random.uniform(100, 160))) };
		};
		expect(estimateBestFitShift(noise('a'), noise('b')).reliable).toBe(false);
	});

	test('clocks that stand years apart cost no accuracy', () => {
		const session = simulateSession({ seed: 6, activity: 'run-intervals', durationS: 1800, preset: 'lag' });
		const { heartRate, truth } = session.wearables[0];
		for (const years of [-30, 11.3, 56]) {
			const byS = Math.round(years * 31_556_952);
			const found = estimateBestFitShift(session.reference.heartRate, moved(heartRate, byS));
			expectSound(found);
			expect(found.reliable).toBe(true);
			expect(Math.abs((found.bestFitShiftS as number) + byS - truth.totalShiftS)).toBeLessThan(1);
		}
	});

	test('stamps with parts of a second move the answer by those parts', () => {
		const session = simulateSession({ seed: 12, activity: 'hiit', durationS: 1500, preset: 'lag' });
		const { heartRate } = session.wearables[0];
		const at = estimateBestFitShift(session.reference.heartRate, heartRate).bestFitShiftS as number;
		fc.assert(
			fc.property(fc.double({ min: -3, max: 3, noNaN: true }), (k) => {
				const then = estimateBestFitShift(session.reference.heartRate, moved(heartRate, k)).bestFitShiftS as number;
				expect(Math.abs(then + k - at)).toBeLessThan(0.12);
			}),
			{ numRuns: 10, seed: 2 }
		);
	});

	test('fourteen hours are placed as well as one', () => {
		const session = simulateSession({ seed: 31, activity: 'ride-outdoor', durationS: 14 * 3600, wearables: [{ clockOffsetS: -3000, driftPpm: 10 }] });
		const { heartRate, truth } = session.wearables[0];
		const found = estimateBestFitShift(session.reference.heartRate, heartRate);
		expect(found.reliable).toBe(true);
		expect(Math.abs((found.bestFitShiftS as number) - truth.totalShiftS)).toBeLessThan(1);
	});

	test('a wearable that counts every other beat for most of a session is placed rightly or not called reliable', () => {
		for (let seed = 0; seed < 12; seed++) {
			const session = simulateSession({ seed: 700 + seed, activity: seed % 2 ? 'run-intervals' : 'ride-outdoor', durationS: 2400, preset: 'lag' });
			const { heartRate, truth } = session.wearables[0];
			const from = heartRate.tS[0] + 300 + 20 * seed;
			const half = { tS: heartRate.tS, value: heartRate.value.map((v, i) => (heartRate.tS[i] > from && heartRate.tS[i] < from + 1500 ? Math.round(v / 2) : v)) };
			const found = estimateBestFitShift(session.reference.heartRate, half);
			expectSound(found);
			expect(!found.reliable || Math.abs((found.bestFitShiftS as number) - truth.totalShiftS) < 5, `seed ${seed}`).toBe(true);
		}
	});

	test('readings every five to eight seconds are placed within two seconds', () => {
		for (let seed = 0; seed < 8; seed++) {
			const session = simulateSession({ seed: 800 + seed, activity: seed % 2 ? 'strength' : 'hill-run', durationS: 2400, preset: 'lag', wearables: [{ irregular: false }] });
			const { heartRate, truth } = session.wearables[0];
			const random = randomStream(seed, 'sparse');
			let next = 0;
			const sparse = kept(heartRate, (_, i) => {
				if (i < next) return false;
				next = i + random.whole(5, 8);
				return true;
			});
			const found = estimateBestFitShift(session.reference.heartRate, sparse);
			expectSound(found);
			expect(Math.abs((found.bestFitShiftS as number) - truth.totalShiftS), `seed ${seed}`).toBeLessThan(2);
		}
	});

	test('a wearable that was started for the last third only is found there', () => {
		for (let seed = 0; seed < 6; seed++) {
			const session = simulateSession({ seed: 850 + seed, activity: seed % 2 ? 'run-intervals' : 'commute', durationS: 4500, preset: 'lag', wearables: [{ driftPpm: 0 }] });
			const { heartRate, truth } = session.wearables[0];
			const from = heartRate.tS[0] + 3000;
			const late = kept(heartRate, (t) => t >= from);
			const found = estimateBestFitShift(session.reference.heartRate, late);
			expect(Math.abs((found.bestFitShiftS as number) - truth.totalShiftS), `seed ${seed}`).toBeLessThan(2);
			const swapped = estimateBestFitShift(late, session.reference.heartRate);
			expect(Math.abs((swapped.bestFitShiftS as number) + truth.totalShiftS), `seed ${seed}, roles swapped`).toBeLessThan(12);
		}
	});

	test('a long pause written by neither side and another by one only do not mislead', () => {
		const session = simulateSession({ seed: 91, activity: 'hill-run', durationS: 3600, preset: 'lag', wearables: [{ faults: NO_FAULTS }] });
		const { heartRate, truth } = session.wearables[0];
		const r = session.reference.heartRate;
		const start = session.startS;
		const reference = kept(r, (t) => t < start + 900 || t > start + 1500);
		const wearable = kept(heartRate, (t) => {
			const at = t + truth.clockOffsetS - start;
			return !(at > 900 && at < 1500) && !(at > 2500 && at < 2800);
		});
		const found = estimateBestFitShift(reference, wearable);
		expect(found.reliable).toBe(true);
		expect(Math.abs((found.bestFitShiftS as number) - truth.totalShiftS)).toBeLessThan(1.2);
	});

	test('the same input gives the same answer to the last digit', () => {
		const session = simulateSession({ seed: 44, activity: 'walk', durationS: 1500 });
		const once = estimateBestFitShift(session.reference.heartRate, session.wearables[0].heartRate);
		estimateBestFitShift(session.wearables[0].heartRate, session.reference.heartRate);
		expect(estimateBestFitShift(session.reference.heartRate, session.wearables[0].heartRate)).toEqual(once);
	});
});

import { describe, expect, test } from 'vitest';
import type { Trace } from '../formats/recording';
import { NO_FAULTS, randomStream, simulateSession, type Activity, type SimulatedSession } from '../simulate';
import { alignRecordings } from './align-recordings';
import { movementGrid } from './movement-grid';

const present = (traces: (Trace | null)[]): Trace[] => traces.filter((t) => t !== null);
const reference = ({ reference: r }: SimulatedSession) => ({ traces: present([r.heartRate, r.rrInterval, r.cadence, r.speed]) });
const wearable = ({ wearables: [w] }: SimulatedSession) => ({ traces: present([w.heartRate, w.cadence]) });

/** The strap's beats as another recorder would list them: other clock, some beats lost, intervals a few ms off. */
function beatsOn(session: SimulatedSession, clockOffsetS: number, driftPpm: number): Trace {
	const { tS, value } = session.reference.rrInterval;
	const random = randomStream(5, 'beats');
	const midS = session.startS + session.durationS / 2;
	const kept = Array.from(tS.keys()).filter((i) => i % 61 !== 0 && !(i > 700 && i < 760));
	return {
		kind: 'rrInterval',
		tS: Float64Array.from(kept, (i) => midS - clockOffsetS + (tS[i] - midS) / (1 + driftPpm * 1e-6)),
		value: Float64Array.from(kept, (i) => value[i] + 4 * random.normal())
	};
}

describe('alignment of two recordings', () => {
	test('cadence on both sides tells clock from lag, within the stated interval', () => {
		const activities: Activity[] = ['run-intervals', 'ride-outdoor', 'hiit', 'commute', 'walk'];
		let inside = 0;
		let n = 0;
		for (const [i, activity] of [...activities, ...activities, ...activities].entries()) {
			const session = simulateSession({ seed: 61_000 + i, activity, durationS: 2400 });
			const { truth } = session.wearables[0];
			const found = alignRecordings(reference(session), wearable(session));
			if (found.clockOffsetS === null || found.clockOffsetCi95 === null || found.responseLagS === null) continue;
			n++;
			expect(Math.abs(found.clockOffsetS - truth.clockOffsetS), activity).toBeLessThan(3);
			expect(Math.abs(found.responseLagS - truth.responseLagS), activity).toBeLessThan(4);
			if (found.clockOffsetCi95[0] <= truth.clockOffsetS && truth.clockOffsetS <= found.clockOffsetCi95[1]) inside++;
		}
		expect(n).toBeGreaterThanOrEqual(12);
		expect(inside).toBeGreaterThanOrEqual(n - 1);
	});

	test('clock offset less response lag is the best-fit shift', () => {
		const session = simulateSession({ seed: 62_000, activity: 'run-intervals', durationS: 2400, preset: 'lag' });
		const { bestFitShiftS, clockOffsetS, responseLagS } = alignRecordings(reference(session), wearable(session));
		expect((clockOffsetS as number) - (responseLagS as number)).toBeCloseTo(bestFitShiftS as number, 9);
	});

	test('without a channel free of lag on both sides the clock offset stays unknown', () => {
		const session = simulateSession({ seed: 63_000, activity: 'run-intervals', durationS: 2400 });
		const found = alignRecordings(reference(session), { traces: [session.wearables[0].heartRate] });
		expect(found).toMatchObject({ clockOffsetS: null, clockOffsetCi95: null, responseLagS: null, clock: null });
		expect(found.bestFitShiftS).not.toBeNull();
	});

	test('movement of two different sessions never gives a clock offset', () => {
		for (let i = 0; i < 12; i++) {
			const activity = (['run-intervals', 'ride-outdoor', 'walk'] as const)[i % 3];
			const a = simulateSession({ seed: 64_000 + i, activity, durationS: 2000 });
			const b = simulateSession({ seed: 64_500 + i, activity, durationS: 2000 });
			expect(alignRecordings(reference(a), wearable(b)).clockOffsetS, `pair ${i}`).toBeNull();
		}
	});

	test.each([0, 120])('beats on both sides give the clock by the beats, and a drift of %s millionths', (driftPpm) => {
		const session = simulateSession({ seed: 65_000, activity: 'strength', durationS: 3000, preset: 'lag', wearables: [{ clockOffsetS: 214.3, driftPpm }] });
		const found = alignRecordings(reference(session), { traces: [session.wearables[0].heartRate, beatsOn(session, 214.3, driftPpm)] });
		expect(found.clock?.channel).toBe('rrInterval');
		expect(Math.abs((found.clockOffsetS as number) - 214.3)).toBeLessThan(0.05);
		expect(Math.abs((found.clock?.driftPpm as number) - driftPpm)).toBeLessThan(5);
	});

	test('beats of another heart give no clock offset', () => {
		const a = simulateSession({ seed: 66_000, activity: 'strength', durationS: 2400, preset: 'none', wearables: [{ clockOffsetS: 0 }] });
		const b = simulateSession({ seed: 66_001, activity: 'strength', durationS: 2400, preset: 'none' });
		const found = alignRecordings({ traces: [a.reference.heartRate, a.reference.rrInterval] }, { traces: [a.wearables[0].heartRate, b.reference.rrInterval] });
		expect(found.clock).toBeNull();
	});

	test('a heart rate that is too even is placed with the help of cadence, and says so', () => {
		const helped = Array.from({ length: 12 }, (_, i) => simulateSession({ seed: 67_000 + i, activity: 'walk', durationS: 1500, preset: 'typical' }))
			.map((session) => ({ session, found: alignRecordings(reference(session), wearable(session)) }))
			.filter(({ found }) => found.reason.includes('near the clock offset'));
		expect(helped.length).toBeGreaterThan(0);
		for (const { session, found } of helped) expect(Math.abs((found.bestFitShiftS as number) - session.wearables[0].truth.totalShiftS)).toBeLessThan(15);
	});

	test('recordings whose stated times do not overlap are placed by shape, and the reason says so', () => {
		const session = simulateSession({ seed: 68_000, activity: 'run-intervals', durationS: 1800, preset: 'lag', wearables: [{ clockOffsetS: 5 * 3600 + 4, faults: NO_FAULTS }] });
		const found = alignRecordings(reference(session), wearable(session));
		expect(found.reliable).toBe(true);
		expect(found.reason).toContain('do not overlap');
		expect(found.reason).toContain('whole-hour mistake of +5 h');
	});

	test('a recording without heart rate is not determinable, but its clock may still be', () => {
		const session = simulateSession({ seed: 69_000, activity: 'run-intervals', durationS: 1800, preset: 'lag' });
		const { cadence } = session.wearables[0];
		const found = alignRecordings(reference(session), { traces: present([cadence]) });
		expect(found).toMatchObject({ bestFitShiftS: null, reliable: false, responseLagS: null });
		expect(found.reason).toMatch(/Not determinable/);
	});
});

describe('movement on whole seconds', () => {
	test('a standing wearer counts as 0 where the recorder wrote on, and as unknown where it did not', () => {
		const seconds = (from: number, to: number) => Float64Array.from({ length: to - from }, (_, i) => from + i);
		const heartRate: Trace = { kind: 'heartRate', tS: Float64Array.from([...seconds(0, 60), ...seconds(100, 160)]), value: new Float64Array(120).fill(120) };
		const moving = Float64Array.from([...seconds(0, 30), ...seconds(40, 60), ...seconds(100, 160)]);
		const grid = movementGrid([heartRate, { kind: 'cadence', tS: moving, value: new Float64Array(moving.length).fill(80) }], 'cadence');
		expect(grid?.value[20]).toBe(80);
		expect(grid?.value[35]).toBe(0);
		expect(grid?.value[80]).toBeNaN();
		expect(grid?.value[120]).toBe(80);
	});

	test('a recorder that writes every few seconds does not stand still in between', () => {
		const tS = Float64Array.from({ length: 60 }, (_, i) => 5 * i);
		const steady = { tS, value: new Float64Array(60).fill(80) };
		const grid = movementGrid([{ kind: 'heartRate', ...steady }, { kind: 'cadence', ...steady }], 'cadence');
		expect(Math.min(...(grid?.value ?? []))).toBe(80);
	});
});

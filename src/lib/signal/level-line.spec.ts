import { describe, expect, test } from 'vitest';
import { randomStream, simulateSession, type Activity } from '../simulate';
import { searchBestFitShift } from './best-fit-shift';
import { compared } from './disagreement';
import { levelLine, withoutLine } from './level-line';

const ACTIVITIES: Activity[] = ['run-intervals', 'ride-outdoor', 'strength', 'hill-run'];

describe('levels of a wearable', () => {
	test.each([
		['6 % high', 1.06, 0],
		['12 % low', 0.88, 0],
		['15 bpm high', 1, 15],
		['8 bpm low', 1, -8]
	])('%s throughout: the wearable is placed as if it were not', (_, gain, biasBpm) => {
		for (const [i, activity] of ACTIVITIES.entries()) {
			const session = simulateSession({ seed: 71_000 + i, activity, durationS: 2400 });
			const { heartRate, truth } = session.wearables[0];
			const { estimate } = searchBestFitShift(session.reference.heartRate, { tS: heartRate.tS, value: heartRate.value.map((v) => v * gain + biasBpm) });
			expect(Math.abs((estimate.bestFitShiftS as number) - truth.totalShiftS), activity).toBeLessThan(2);
			expect(estimate.reliable, activity).toBe(true);
			expect(estimate.reason).toContain('throughout');
		}
	});

	test('a wearable of right levels is left as it is', () => {
		for (const [i, activity] of ACTIVITIES.entries()) {
			const session = simulateSession({ seed: 72_000 + i, activity, durationS: 2400, preset: 'lag' });
			expect(searchBestFitShift(session.reference.heartRate, session.wearables[0].heartRate).estimate.reason).not.toContain('throughout');
		}
	});

	test('the line is found under a fifth of wild values, and taking it out gives the reference back', () => {
		const random = randomStream(3, 'levels');
		const reference = Float64Array.from({ length: 2000 }, (_, i) => 130 + 35 * Math.sin(i / 90));
		const wearable = reference.map((v, i) => (i % 500 < 100 ? 75 : 1.1 * v - 5 + random.normal()));
		const line = levelLine(compared(0, reference), compared(0, wearable), 0);
		expect(line).not.toBeNull();
		if (!line) return;
		expect(Math.abs(line.gain - 1.1)).toBeLessThan(0.01);
		const back = withoutLine(wearable, line);
		for (let i = 100; i < 500; i++) expect(Math.abs(back[i] - reference[i])).toBeLessThan(5);
	});

	test('levels of two different hearts far apart are no line', () => {
		const low = new Float64Array(600).fill(70);
		const high = Float64Array.from({ length: 600 }, (_, i) => 160 + (i % 7));
		expect(levelLine(compared(0, low), compared(0, high), 0)).toBeNull();
	});
});

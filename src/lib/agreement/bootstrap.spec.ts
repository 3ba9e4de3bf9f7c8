import { describe, expect, it } from 'vitest';
import { bootstrapFigures, intervalOf, RESAMPLED, type BootstrapInterval } from './bootstrap';
import { isDetermined } from './determinable';
import { agreementFigures } from './figures';
import { gaussian, sfc32, uniform } from './random';
import { sumSession, type SessionSums } from './sessions';

function study(sessions: number, people: number, seed: number, n = 60): SessionSums[] {
	const next = sfc32(seed);
	const person = Array.from({ length: people }, () => 3 * gaussian(next));
	return Array.from({ length: sessions }, (_, s) => {
		const reference = Float64Array.from({ length: n }, () => 130 + 20 * gaussian(next));
		const shift = person[s % people] + gaussian(next);
		return sumSession({
			session: `S${s}`,
			participant: `P${s % people}`,
			reference,
			wearable: reference.map((x) => x + shift + 3 * gaussian(next))
		});
	});
}
const found = (result: BootstrapInterval | { notDeterminable: string } | undefined): BootstrapInterval => {
	if (!result || 'notDeterminable' in result) throw new Error(result?.notDeterminable ?? 'absent');
	return result;
};

describe('the seeded generator', () => {
	it('equal seeds give equal sequences, others do not', () => {
		const take = (seed: number) => {
			const next = sfc32(seed);
			return Array.from({ length: 5 }, next);
		};
		expect(take(1)).toEqual(take(1));
		expect(take(1)).not.toEqual(take(2));
	});
	it('is level over its range and normal where it should be', () => {
		const next = sfc32(11);
		const bins = new Array<number>(10).fill(0);
		let sum = 0;
		let squares = 0;
		for (let i = 0; i < 20000; i++) {
			bins[Math.floor(uniform(next) * 10)]++;
			const z = gaussian(next);
			sum += z;
			squares += z * z;
		}
		// Chi-squared with 9 df stays below its 0.999 quantile, 27.88.
		expect(bins.reduce((x, b) => x + (b - 2000) ** 2 / 2000, 0)).toBeLessThan(27.88);
		expect(Math.abs(sum / 20000)).toBeLessThan(0.03);
		expect(Math.abs(squares / 20000 - 1)).toBeLessThan(0.04);
	});
});

describe('cluster bootstrap', () => {
	const sessions = study(40, 8, 5);
	it('would not be reproducible without its seed', () => {
		const run = (seed: number) => bootstrapFigures(sessions, { resamples: 500, seed });
		expect(run(3)).toEqual(run(3));
		expect(run(3)).not.toEqual(run(4));
	});
	it('its totals are those of drawing whole sessions: the same figures as resampling the readings the long way', () => {
		// Few sessions, many draws: the distribution of the mean has a known SD, √(Σ(mᵢ − m)²/k)/√k.
		const small = study(6, 6, 9);
		const means = small.map((s) => s.sums.meanDifference);
		const mean = means.reduce((a, b) => a + b) / 6;
		const sd = Math.sqrt(means.reduce((s, v) => s + (v - mean) ** 2, 0) / 6 / 6);
		const { standardError } = found(bootstrapFigures(small, { resamples: 20000, seed: 2 }).bias);
		expect(Math.abs(standardError / sd - 1)).toBeLessThan(0.03);
	});
	it('every figure lies in its intervals, and BCa and percentile stand near each other', () => {
		const result = bootstrapFigures(sessions, { resamples: 2000, seed: 1 });
		const figures = agreementFigures([]);
		expect(Object.keys(result).sort()).toEqual([...RESAMPLED].sort());
		const centre = { bias: sessions.reduce((s, x) => s + x.sums.meanDifference, 0) / 40 };
		const { percentile, bca } = found(result.bias);
		for (const [low, high] of [percentile, bca]) {
			expect(low).toBeLessThan(centre.bias);
			expect(high).toBeGreaterThan(centre.bias);
		}
		expect(figures.n).toBe(0);
		for (const key of RESAMPLED) {
			const { percentile: p, bca: b } = found(result[key]);
			expect(Math.abs(p[0] - b[0])).toBeLessThan(0.5 * (p[1] - p[0]));
		}
	});
	it('asking for fewer figures changes none of them', () => {
		const all = found(bootstrapFigures(sessions, { resamples: 500, seed: 6 }).mae);
		const one = found(bootstrapFigures(sessions, { resamples: 500, seed: 6, figures: ['mae'] }).mae);
		for (const kind of ['percentile', 'bca'] as const)
			for (const side of [0, 1]) expect(one[kind][side]).toBeCloseTo(all[kind][side], 10);
	});
	it('people who differ make the interval wider than their sessions alone would', () => {
		const bySession = found(bootstrapFigures(sessions, { resamples: 2000, seed: 1, figures: ['bias'] }).bias);
		const byPerson = found(
			bootstrapFigures(sessions, { resamples: 2000, seed: 1, figures: ['bias'], cluster: 'participant' }).bias
		);
		expect(byPerson.standardError).toBeGreaterThan(1.5 * bySession.standardError);
	});
	it('more sessions than sixteen bits can draw at once are drawn evenly', () => {
		const many = Array.from({ length: 5000 }, (_, i) =>
			sumSession({ session: `S${i}`, reference: Float64Array.of(100), wearable: Float64Array.of(100 + (i % 2)) })
		);
		const { standardError } = found(bootstrapFigures(many, { resamples: 400, seed: 1, figures: ['bias'] }).bias);
		expect(Math.abs(standardError / (0.5 / Math.sqrt(5000)) - 1)).toBeLessThan(0.15);
	});
	it('one session, or none, has no interval', () => {
		for (const few of [sessions.slice(0, 1), []]) {
			const result = bootstrapFigures(few, { resamples: 200, seed: 1, figures: ['bias', 'ccc'] });
			expect(isDetermined(intervalOf(result.bias, 'bca'))).toBe(false);
		}
	});
});

import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import kappaCases from './checks/kappa.json';
import { adjustComparisons, comparePaired, compareUnpaired } from './compare';
import { judge, PUBLISHED_CRITERIA } from './criteria';
import { isDetermined, notDeterminable, type Figure, type Interval } from './determinable';
import { meanAbsoluteError } from './errors';
import { agreementFigures } from './figures';
import { holm } from './holm';
import { sessionInfluence, sessionsNeeded } from './influence';
import { cohenKappa, labelTable } from './kappa';
import { DEFAULT_PLAN } from './plan';
import { sumSession, type SessionSums } from './sessions';
import { verdictOf } from './verdict';

const number = (figure: Figure): number => (isDetermined(figure) ? figure : NaN);
/** A session in which the device is off by `error` bpm on every reading, over `n` readings. */
const off = (session: string, error: number, n = 10, participant?: string): SessionSums =>
	sumSession({
		session,
		participant,
		reference: new Float64Array(n).fill(100),
		wearable: new Float64Array(n).fill(100 + error)
	});

describe("Cohen's kappa", () => {
	it('the 3 × 3 table of proportions (Cohen 1968, Psychol Bull 70:213-220)', () => {
		expect(number(cohenKappa(kappaCases.cases[0].proportions ?? []).kappa)).toBeCloseTo(kappaCases.cases[0].kappa, 11);
	});
	it('an invented 2 × 2 table and its interval (R psych 2.2.9)', () => {
		const { kappa, ci95 } = cohenKappa(kappaCases.cases[1].counts ?? []);
		expect(number(kappa)).toBeCloseTo(0.4, 12);
		expect(ci95).toEqual([expect.closeTo(0.151092290477, 4), expect.closeTo(0.648907709523, 4)]);
	});
	it('from labels: full agreement is 1, and one label only is no agreement beyond chance', () => {
		expect(cohenKappa(labelTable([0, 1, 2, 1], [0, 1, 2, 1], 3)).kappa).toBe(1);
		expect(isDetermined(cohenKappa(labelTable([1, 1], [1, 1], 3)).kappa)).toBe(false);
	});
	it('refuses a table that is not square', () =>
		expect(() => cohenKappa([[1, 2]])).toThrow(expect.objectContaining({ code: 'not-a-table' })));
});

describe('Holm', () => {
	it('adjusts as in the step-down rule: .01 .04 .03 .005 become .03 .06 .06 .02', () => {
		expect(holm([0.01, 0.04, 0.03, 0.005])).toEqual([0.03, 0.06, 0.06, 0.02].map((p) => expect.closeTo(p, 12)));
	});
	it('never lowers a p value and keeps their order', () => {
		fc.assert(
			fc.property(fc.array(fc.double({ min: 0, max: 1, noNaN: true }), { maxLength: 12 }), (p) => {
				const adjusted = holm(p);
				p.forEach((v, i) => {
					expect(adjusted[i]).toBeGreaterThanOrEqual(v);
					p.forEach((w, j) => v <= w && expect(adjusted[i]).toBeLessThanOrEqual(adjusted[j]));
				});
			})
		);
	});
});

describe('the words of a verdict follow the interval', () => {
	const many = { sessions: 20, participants: 5 };
	const words = (low: number, high: number) => {
		const v = verdictOf([low, high], many, DEFAULT_PLAN);
		return [v.words, v.closer];
	};
	it.each([
		[1.2, 3, 'clearly closer', 'first'],
		[-3, -1.2, 'clearly closer', 'second'],
		[0.1, 1, 'too small a difference to matter', 'first'],
		[0.5, 3, 'closer, perhaps by little', 'first'],
		[-3, -0.5, 'closer, perhaps by little', 'second'],
		[-0.5, 3, 'cannot tell yet', null],
		[-3, 0.5, 'cannot tell yet', null],
		[-1, 1, 'no difference that matters', null],
		[-0.4, 0.9, 'no difference that matters', null],
		[0, 1, 'no difference that matters', null],
		[1, 3, 'closer, perhaps by little', 'first']
	])('%d to %d: %s', (low, high, want, closer) => expect(words(low, high)).toEqual([want, closer]));
	it('says nothing in words below the plan’s minimum, or without an interval', () => {
		expect(verdictOf([5, 6], { sessions: 5, participants: 5 }, DEFAULT_PLAN)).toMatchObject({
			code: 'no-verdict',
			reason: expect.stringContaining('5 sessions')
		});
		expect(verdictOf([5, 6], { sessions: 50, participants: 1 }, DEFAULT_PLAN).reason).toContain('1 person;');
		expect(verdictOf(notDeterminable('Why.'), many, DEFAULT_PLAN).reason).toBe('Why.');
	});
	it('turning the devices round turns the verdict round', () => {
		fc.assert(
			fc.property(
				fc.double({ min: -9, max: 9, noNaN: true }),
				fc.double({ min: 0.01, max: 9, noNaN: true }),
				(low, width) => {
					const a = verdictOf([low, low + width], many, DEFAULT_PLAN);
					const b = verdictOf([-low - width, -low], many, DEFAULT_PLAN);
					expect(b.words).toBe(a.words);
					if (a.closer) expect(b.closer).toBe(a.closer === 'first' ? 'second' : 'first');
				}
			)
		);
	});
});

describe('one device against another', () => {
	const first = [2, 3, 2.5, 4, 3, 2, 3.5, 2.5].map((e, i) => off(`S${i}`, e, 10, `P${i % 4}`));
	const second = [5, 6.5, 5, 7.2, 6, 5.1, 6.4, 5.9].map((e, i) => off(`S${i}`, e, 10, `P${i % 4}`));
	it('in the same sessions: the gap is the paired difference, tighter than the unpaired one', () => {
		const paired = comparePaired(first, second, DEFAULT_PLAN);
		const unpaired = compareUnpaired(first, second, DEFAULT_PLAN);
		expect(number(paired.gapBpm)).toBeCloseTo(24.6 / 8, 10);
		expect(number(unpaired.gapBpm)).toBeCloseTo(24.6 / 8, 10);
		const width = (ci: Interval) => (isDetermined(ci) ? ci[1] - ci[0] : NaN);
		expect(width(paired.gapCi95)).toBeLessThan(width(unpaired.gapCi95));
		expect(paired).toMatchObject({
			sessions: 8,
			participants: 4,
			design: 'paired',
			verdict: { code: 'clearly-closer', closer: 'first' }
		});
		expect(unpaired.design).toBe('unpaired');
	});
	it('the paired p value is that of a paired t test when sessions are of one length', () => {
		const d = [3, 3.5, 2.5, 3.2, 3, 3.1, 2.9, 3.4];
		const mean = d.reduce((a, b) => a + b) / 8;
		const se = Math.sqrt(d.reduce((s, v) => s + (v - mean) ** 2, 0) / 7 / 8);
		const { gapCi95 } = comparePaired(first, second, DEFAULT_PLAN);
		expect(gapCi95).toEqual([
			expect.closeTo(mean - 2.364624251592785 * se, 9),
			expect.closeTo(mean + 2.364624251592785 * se, 9)
		]);
	});
	it('leaves out sessions that only one device has, and says when none is shared', () => {
		expect(comparePaired(first, second.slice(0, 5), DEFAULT_PLAN).sessions).toBe(5);
		const none = comparePaired(first, [off('X', 3)], DEFAULT_PLAN);
		expect(isDetermined(none.gapBpm)).toBe(false);
		expect(none.verdict.reason).toContain('share no session');
	});
	it('by person, people are the independent units', () => {
		const byPerson = comparePaired(first, second, DEFAULT_PLAN, { cluster: 'participant' });
		expect(number(byPerson.gapBpm)).toBeCloseTo(24.6 / 8, 10);
		expect(byPerson.gapCi95).not.toEqual(comparePaired(first, second, DEFAULT_PLAN).gapCi95);
	});
	it('many comparisons are adjusted together; those without a p value stay without', () => {
		const one = comparePaired(first, second, DEFAULT_PLAN);
		const none = comparePaired(first, [off('X', 3)], DEFAULT_PLAN);
		const adjusted = adjustComparisons([one, none, one]);
		expect(number(adjusted[0])).toBeCloseTo(2 * number(one.p), 15);
		expect(isDetermined(adjusted[1])).toBe(false);
	});
});

describe('criteria are judged by the interval', () => {
	const figures = (errors: number[]) =>
		agreementFigures(
			errors.map((e, i) => ({
				session: `S${i}`,
				reference: new Float64Array(20).fill(100),
				wearable: Float64Array.from({ length: 20 }, (_, k) => 100 + e + (k % 2))
			}))
		);
	const mape10 = PUBLISHED_CRITERIA.find((c) => c.id === 'mape10') ?? PUBLISHED_CRITERIA[0];
	it.each([
		['yes', [2, 3, 2, 3, 2, 3]],
		['no', [22, 23, 22, 23, 22, 23]],
		['cannot tell yet', [2, 18, 3, 16, 2, 12]],
		['cannot tell yet', [2]]
	])('%s', (met, errors) => expect(judge(mape10, figures(errors)).met).toBe(met));
	it('without pairs nothing is judged', () => expect(judge(mape10, agreementFigures([])).met).toBe('not determinable'));
	it('every published one names its source and that it is from memory', () => {
		for (const c of PUBLISHED_CRITERIA) expect([c.source.length > 10, c.fromMemory]).toEqual([true, true]);
	});
});

describe('influence', () => {
	it('names the session that the headline hangs on first', () => {
		const sessions = [off('S1', 2), off('S2', 3), off('S3', 30), off('S4', 2)];
		const [top] = sessionInfluence(sessions, meanAbsoluteError);
		expect([top.session, number(top.without), number(top.change)]).toEqual([
			'S3',
			expect.closeTo(7 / 3, 12),
			expect.closeTo(7 / 3 - 37 / 4, 12)
		]);
	});
	it('one session has no influence to speak of', () => {
		expect(isDetermined(sessionInfluence([off('S1', 2)], meanAbsoluteError)[0].change)).toBe(false);
	});
	it('says how many sessions a half-width needs, and stays when there are enough', () => {
		const estimate = { mean: 0, standardError: 1, df: 9 };
		const needed = number(sessionsNeeded(estimate, 10, 0.5));
		// s = √10; t(k − 1) s / √k ≤ 0.5 first holds near k = (1.96 · √10 / 0.5)² ≈ 154, a little more for t.
		expect(needed).toBeGreaterThan(153);
		expect(needed).toBeLessThan(160);
		expect(sessionsNeeded(estimate, 10, 5)).toBe(10);
		expect(isDetermined(sessionsNeeded(notDeterminable('x'), 1, 1))).toBe(false);
		expect(isDetermined(sessionsNeeded(estimate, 10, 0))).toBe(false);
	});
});

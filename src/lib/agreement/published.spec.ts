/** The engine beside published values. Sources stand in `checks/` and in the names. */
import { describe, expect, it } from 'vitest';
import cardiac from './checks/bland-altman-1999-cardiac-output.json';
import peakFlow from './checks/bland-altman-1986-peak-flow.json';
import tost from './checks/equivalence-tost.json';
import errorsInVariables from './checks/errors-in-variables.json';
import factors from './checks/limits-confidence-factors.json';
import atmWtAg from './checks/nist-anova-atmwtag.json';
import siRstv from './checks/nist-anova-sirstv.json';
import michelso from './checks/nist-michelso-univariate.json';
import norris from './checks/nist-norris-regression.json';
import numAcc from './checks/nist-numacc-univariate.json';
import shroutFleiss from './checks/shrout-fleiss-1979-icc.json';
import { isDetermined, type Figure, type Interval } from './determinable';
import { agreementFigures, type Figures } from './figures';
import { intraclassOfPairs, intraclassOfTable } from './intraclass';
import { naiveSd, varianceParts } from './limits';
import { exactLimitFactors, moverLimitFactors } from './limits-intervals';
import { leastSquares, theilSen } from './lines';
import type { PairGroup } from './sessions';
import { sumPairs } from './sums';

const number = (figure: Figure): number => (isDetermined(figure) ? figure : NaN);
const ends = (interval: Interval): [number, number] => (isDetermined(interval) ? interval : [NaN, NaN]);
const relative = (got: number, want: number) => Math.abs(got - want) / Math.abs(want);

const onePairASession = (reference: number[], wearable: number[]): Figures =>
	agreementFigures(
		reference.map((x, i): PairGroup => ({
			session: String(i),
			reference: Float64Array.of(x),
			wearable: Float64Array.of(wearable[i])
		}))
	);

describe('Bland & Altman 1986, peak flow (Lancet 1:307-310); one pair a subject', () => {
	const { reference, test } = peakFlow.input;
	const figures = onePairASession(reference, test);
	const { expected } = peakFlow;

	it('bias and SD; differences are the other way round there', () => {
		expect(relative(number(figures.bias), -expected.mean_difference.value)).toBeLessThan(1e-12);
		expect(relative(number(figures.sdNaive), expected.sd.value)).toBeLessThan(1e-12);
	});
	it('one reading a session: the SD that allows for repeats is the plain SD', () => {
		expect(relative(number(figures.sd), expected.sd.value)).toBeLessThan(1e-12);
		expect(ends(figures.loa)).toEqual(ends(figures.loaNaive));
	});
	it('limits of agreement with 1.96 SD', () => {
		const [low, high] = ends(figures.loa);
		expect(low).toBeCloseTo(-expected.limits_1_96sd.value[1], 9);
		expect(high).toBeCloseTo(-expected.limits_1_96sd.value[0], 9);
	});
	it('95 % interval of the bias, printed −22.0 to 17.8', () => {
		const [low, high] = ends(figures.biasCi95);
		expect(low).toBeCloseTo(-expected.ci_bias_95.value[1], 6);
		expect(high).toBeCloseTo(-expected.ci_bias_95.value[0], 6);
	});
	it('the exact interval of a limit (Carkeet 2015) is near the printed approximation and lopsided outwards', () => {
		// The printed one, −114.3 to −45.1, takes the limit's standard error as √(3 s²/n) and is symmetric.
		const [low, high] = ends(figures.loaUpperCi95);
		expect(low).toBeGreaterThan(45.1);
		expect(high).toBeGreaterThan(114.3);
		expect(figures.loaCiMethod).toBe('exact');
	});
	it('Pearson r, printed 0.94', () =>
		expect(relative(number(figures.pearsonR), expected.pearson_r.value)).toBeLessThan(1e-12));
	it("Lin's concordance and its interval (R epiR 2.0.57)", () => {
		expect(number(figures.ccc)).toBeCloseTo(expected.ccc_lin.value, 8);
		expect(ends(figures.cccCi95)[0]).toBeCloseTo(expected.ccc_lin.ci[0], 7);
		expect(ends(figures.cccCi95)[1]).toBeCloseTo(expected.ccc_lin.ci[1], 7);
	});
	it('Deming regression, closed form', () => {
		expect(figures.deming).toEqual({
			slope: expect.closeTo(errorsInVariables.deming.slope, 12),
			intercept: expect.closeTo(errorsInVariables.deming.intercept, 9)
		});
	});
	it('Theil-Sen (scipy.stats.theilslopes)', () => {
		expect(theilSen(reference, test)).toEqual({
			slope: expect.closeTo(errorsInVariables.theil_sen.slope, 12),
			intercept: expect.closeTo(errorsInVariables.theil_sen.intercept, 9)
		});
	});
	it('equivalence within 30 l/min (Schuirmann 1987; scipy.stats.t)', () => {
		const { equivalence } = agreementFigures(
			reference.map((x, i) => ({
				session: String(i),
				reference: Float64Array.of(x),
				wearable: Float64Array.of(test[i])
			})),
			{ plan: { equivalenceMarginBpm: tost.margin } }
		);
		expect(equivalence).toEqual({
			marginBpm: 30,
			tLower: expect.closeTo(tost.t_lower, 10),
			tUpper: expect.closeTo(tost.t_upper, 10),
			pLower: expect.closeTo(tost.p_lower, 10),
			pUpper: expect.closeTo(tost.p_upper, 10),
			ci90: [expect.closeTo(tost.ci90[0], 6), expect.closeTo(tost.ci90[1], 6)],
			equivalent: true
		});
	});
});

describe('Bland & Altman 1999 section 5.3, cardiac output (Stat Methods Med Res 8:135-160); several pairs a subject', () => {
	const subjects = [...new Set(cardiac.input.data.map((row) => row[0]))];
	const groups = subjects.map((subject): PairGroup => {
		const rows = cardiac.input.data.filter((row) => row[0] === subject);
		return {
			session: String(subject),
			reference: Float64Array.from(rows, (r) => r[2]),
			wearable: Float64Array.from(rows, (r) => r[3])
		};
	});
	const figures = agreementFigures(groups);
	const parts = varianceParts(groups.map((g) => sumPairs(g.reference, g.wearable)));
	const { expected } = cardiac;

	it('counts', () => expect([figures.n, figures.sessions]).toEqual([expected.pairs, expected.subjects]));
	it('mean squares, n0 and the part between subjects', () => {
		expect(number(parts.meanSquareBetween)).toBeCloseTo(expected.ms_between, 4);
		expect(number(parts.meanSquareWithin)).toBeCloseTo(expected.ms_within.value, 6);
		expect(number(parts.n0)).toBeCloseTo(expected.n0, 6);
		expect(number(figures.varBetween)).toBeCloseTo(expected.var_between, 7);
	});
	it('SD of one difference, printed 0.99, wider than the naive one', () => {
		expect(number(figures.sd)).toBeCloseTo(expected.sd_total.value, 7);
		expect(number(figures.sdNaive)).toBeCloseTo(expected.naive_sd, 7);
	});
	it('limits, printed −1.34 to 2.54 for the opposite difference', () => {
		expect(number(figures.bias)).toBeCloseTo(-expected.mean_difference_RV_minus_IC.value, 11);
		expect(ends(figures.loa)[0]).toBeCloseTo(-expected.limits.value[1], 5);
		expect(ends(figures.loa)[1]).toBeCloseTo(-expected.limits.value[0], 5);
	});
});

describe('NIST StRD one-way analysis of variance, certified', () => {
	const parts = (data: number[][]) => {
		const levels = [...new Set(data.map((row) => row[0]))];
		return varianceParts(
			levels.map((level) => {
				const values = Float64Array.from(
					data.filter((row) => row[0] === level),
					(row) => row[1]
				);
				return sumPairs(new Float64Array(values.length), values);
			})
		);
	};
	it('SiRstv: mean squares 1.27865654e-2 and 1.0831828e-2', () => {
		const { meanSquareBetween, meanSquareWithin } = parts(siRstv.data);
		expect(relative(number(meanSquareBetween), 1.27865654e-2)).toBeLessThan(1e-9);
		expect(relative(number(meanSquareWithin), 1.0831828e-2)).toBeLessThan(1e-9);
	});
	it('AtmWtAg: seven constant leading digits cost the mean squares none that doubles can hold', () => {
		const { meanSquareBetween, meanSquareWithin } = parts(atmWtAg.data);
		// The data themselves, read as doubles, carry the mean squares to about 9 digits.
		expect(relative(number(meanSquareBetween), 3.638341875e-9)).toBeLessThan(2e-8);
		expect(relative(number(meanSquareWithin), 2.28155932970014e-10)).toBeLessThan(1e-8);
	});
});

describe('NIST StRD univariate summary statistics, certified', () => {
	const spread = (values: Float64Array) => {
		const sums = sumPairs(new Float64Array(values.length), values);
		return { mean: sums.meanDifference, sd: number(naiveSd(sums)) };
	};
	it('Michelso (certified values from memory)', () => {
		const { mean, sd } = spread(Float64Array.from(michelso.input));
		expect(relative(mean, michelso.certified.mean)).toBeLessThan(1e-14);
		expect(relative(sd, michelso.certified.sd)).toBeLessThan(1e-12);
	});
	it.each([
		['NumAcc3', 1e6, numAcc.certified.NumAcc3, 1e-9],
		['NumAcc4', 1e7, numAcc.certified.NumAcc4, 1e-8]
	])('%s (from memory): a large constant does not eat the spread', (_, c, certified, tolerance) => {
		const { mean, sd } = spread(
			Float64Array.from({ length: 1001 }, (__, i) => (i === 0 ? c + 0.2 : i % 2 ? c + 0.1 : c + 0.3))
		);
		expect(relative(mean, certified.mean)).toBeLessThan(1e-14);
		// The inputs are rounded to doubles: what is left of 0.1 is certain to this many digits only.
		expect(relative(sd, certified.sd)).toBeLessThan(tolerance);
	});
});

describe('NIST StRD linear regression, Norris, certified', () => {
	const line = leastSquares(sumPairs(Float64Array.from(norris.input.x), Float64Array.from(norris.input.y)));
	it('slope, intercept, residual SD and R²', () => {
		if ('notDeterminable' in line) throw new Error(line.notDeterminable);
		expect(relative(line.slope, 1.00211681802045)).toBeLessThan(1e-13);
		expect(relative(line.intercept, -0.262323073774029)).toBeLessThan(1e-9);
		expect(relative(number(line.residualSd), 0.884796396144373)).toBeLessThan(1e-9);
		expect(relative(number(line.rSquared), 0.999993745883712)).toBeLessThan(1e-13);
	});
});

describe('Shrout & Fleiss 1979, tables 2-4 (Psychol Bull 86:420-428; R psych 2.2.9)', () => {
	const { targets_by_judges: table } = shroutFleiss.input;
	const icc = intraclassOfTable(table);
	const { expected } = shroutFleiss;
	it.each([
		['1,1', expected['ICC(1,1)']],
		['2,1', expected['ICC(2,1)']],
		['3,1', expected['ICC(3,1)']]
	] as const)('ICC(%s) and its interval', (form, want) => {
		expect(relative(number(icc[form]), want.value)).toBeLessThan(1e-9);
		expect(ends(icc.ci95[form])[0]).toBeCloseTo(want.ci[0], 7);
		expect(ends(icc.ci95[form])[1]).toBeCloseTo(want.ci[1], 7);
	});
	it('the forms of the mean of four judges', () => {
		expect(relative(number(icc['1,k']), expected['ICC(1,4)'].value)).toBeLessThan(1e-9);
		expect(relative(number(icc['2,k']), expected['ICC(2,4)'].value)).toBeLessThan(1e-9);
		expect(relative(number(icc['3,k']), expected['ICC(3,4)'].value)).toBeLessThan(1e-9);
	});
	it('from the sums of pairs: the same as from the table of two judges', () => {
		const pairs = table.map((row) => [row[0], row[3]]);
		const fromSums = intraclassOfPairs(
			sumPairs(
				Float64Array.from(pairs, (p) => p[0]),
				Float64Array.from(pairs, (p) => p[1])
			)
		);
		const fromTable = intraclassOfTable(pairs);
		for (const form of ['1,1', '2,1', '3,1'] as const)
			expect(number(fromSums[form])).toBeCloseTo(number(fromTable[form]), 12);
	});
});

describe('intervals of a limit of agreement, factors of the SD', () => {
	it.each(factors.rows.map((row) => [row.n, row] as const))(
		'n = %d: exact (Carkeet 2015) and MOVER (Zou 2013), computed with scipy.stats',
		(n, row) => {
			const exact = exactLimitFactors(n);
			const mover = moverLimitFactors(n);
			for (const side of [0, 1]) {
				expect(relative(exact[side], row.exact_upper_limit_ci[side])).toBeLessThan(1e-8);
				expect(relative(mover[side], row.mover_upper_limit_ci[side])).toBeLessThan(1e-8);
			}
		}
	);
});

import { describe, expect, it } from 'vitest';
import quantiles from './checks/quantiles.json';
import {
	chiSquaredCdf,
	chiSquaredQuantile,
	fisherCdf,
	fisherQuantile,
	logGamma,
	noncentralStudentCdf,
	noncentralStudentQuantile,
	normalCdf,
	normalQuantile,
	studentCdf,
	studentQuantile
} from './distributions';

const relative = (got: number, want: number) => Math.abs(got - want) / Math.max(Math.abs(want), 1e-300);

describe('quantiles as in handbook tables (scipy.stats ppf)', () => {
	it.each(quantiles.values.normal)('normal %d', (p, z) => expect(Math.abs(normalQuantile(p) - z)).toBeLessThan(1e-12));
	// scipy 1.10's t quantiles carry about eight digits; the closed forms below carry all.
	it.each(quantiles.values.t)('t %d with %d df', (p, df, t) =>
		expect(relative(studentQuantile(p, df), t)).toBeLessThan(1e-8)
	);
	it.each(quantiles.values.chi2)('chi-squared %d with %d df', (p, df, x) =>
		expect(relative(chiSquaredQuantile(p, df), x)).toBeLessThan(1e-11)
	);
	it.each(quantiles.values.f)('F %d with %d and %d df', (p, a, b, f) =>
		expect(relative(fisherQuantile(p, a, b), f)).toBeLessThan(1e-11)
	);
});

describe('distribution functions', () => {
	it('Student’s t with one and two degrees of freedom has its closed forms', () => {
		for (const p of [0.9, 0.95, 0.975, 0.995, 0.9999]) {
			expect(relative(studentQuantile(p, 1), Math.tan(Math.PI * (p - 0.5)))).toBeLessThan(1e-12);
			expect(relative(studentQuantile(p, 2), (2 * p - 1) / Math.sqrt(2 * p * (1 - p)))).toBeLessThan(1e-12);
		}
	});
	it('invert their quantiles over the range that intervals use', () => {
		for (const p of [1e-6, 0.001, 0.025, 0.3, 0.5, 0.8, 0.975, 0.9999]) {
			expect(normalCdf(normalQuantile(p))).toBeCloseTo(p, 13);
			for (const df of [1, 2.5, 30, 1e4, 1e7]) {
				expect(studentCdf(studentQuantile(p, df), df)).toBeCloseTo(p, 11);
				expect(chiSquaredCdf(chiSquaredQuantile(p, df), df)).toBeCloseTo(p, 11);
				expect(fisherCdf(fisherQuantile(p, df, 7), df, 7)).toBeCloseTo(p, 11);
			}
		}
	});
	it('logGamma gives factorials', () => {
		let factorial = 1;
		for (let n = 1; n <= 20; n++) {
			expect(relative(Math.exp(logGamma(n + 1)), (factorial *= n))).toBeLessThan(1e-12);
		}
	});
	it('the non-central t with no shift is the central one, for few and many degrees of freedom', () => {
		for (const df of [1, 2, 5, 30, 500]) {
			for (const t of [-3, -0.4, 0, 1.2, 4]) expect(noncentralStudentCdf(t, df, 0)).toBeCloseTo(studentCdf(t, df), 10);
		}
	});
	it('the non-central t quantile inverts its distribution function where the shift is large', () => {
		for (const [df, delta] of [
			[9, 6.2],
			[99, 19.6],
			[499, 43.8]
		]) {
			for (const p of [0.025, 0.5, 0.975])
				expect(noncentralStudentCdf(noncentralStudentQuantile(p, df, delta), df, delta)).toBeCloseTo(p, 11);
		}
	});
});

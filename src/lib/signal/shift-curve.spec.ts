import { expect, test } from 'vitest';
import { correlationAtShift, prepareTrace, shiftCurve } from './shift-curve';
import type { SecondGrid } from './second-grid';

/**
 * Computed with scikit-image 0.19, cross_correlate_masked(a, b, mask_a, mask_b, mode="full", overlap_ratio=0.3), after
 * Padfield D (2012) IEEE Trans Image Process 21:2706-2718. Out of range overlaps are 0 there.
 */
const MASKED = {
	a: [119.5, 117.0, 117.5, 117.9, 117.5, 112.4, 111.4, 111.3, 111.5, 108.4, 107.5, 105.5, 103.9, 106.0, 104.4, 104.3, 106.1, 104.9, 104.7, 104.9, 105.1, 102.6, 102.8, 105.5],
	b: [101.8, 103.2, 105.6, 119.2, 118.0, 117.9, 117.3, 117.5, 112.7, 111.3, 111.6, 111.5, 108.7, 108.2, 105.2, 104.0, 105.8, 104.5, 103.7, 105.8, 104.8, 105.1, 105.5, 104.4],
	emptyA: [5, 6, 7],
	emptyB: [14, 15, 16],
	full: [0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.9304629828210932, 0.9216556066052273, 0.8291576551996817, 0.8631041040443259, 0.9300575736387806, 0.931323173352955, 0.9357981379817112, 0.9337458225364226, 0.9652769918390831, 0.996517631402526, 0.7822749004793322, 0.5624636471502951, 0.2933256287827159, 0.12780543291796076, -0.17634572244327387, -0.14715474258658748, 0.009567958592541627, 0.6208485846975659, -0.07914311535947577, -0.5329430439693101, -0.6300200534995162, -0.38934691723844983, -0.1267575121625296, -0.07402397469972835, 0.12149955918902013, 0.08593855147154895, -0.1563200345528625, -0.397684948321468, -0.45269064062745973, -0.3707835550754612, -0.5638961818090191, 0.0, 0.0, 0.0, 0.0, 0.0]
};

const grid = (value: number[], empty: number[]): SecondGrid => ({
	startS: 0,
	value: Float64Array.from(value, (v, i) => (empty.includes(i) ? NaN : v)),
	valid: value.length - empty.length
});

test('equals the masked correlation of scikit-image 0.19 (Padfield 2012) at every shift with enough overlap', () => {
	const a = grid(MASKED.a, MASKED.emptyA);
	const b = grid(MASKED.b, MASKED.emptyB);
	let compared = 0;
	MASKED.full.forEach((expected, k) => {
		if (expected === 0) return;
		const { r } = correlationAtShift(a, b, k - (MASKED.b.length - 1), 3);
		expect(Math.abs(r - expected), `shift ${k - (MASKED.b.length - 1)}`).toBeLessThan(1e-9);
		compared++;
	});
	expect(compared).toBeGreaterThan(25);
});

test('a curve has no value where hardly anything overlaps or one side is constant, and 1 where the traces are the same', () => {
	const tS = Float64Array.from({ length: 200 }, (_, i) => 1000 + i);
	const wave = prepareTrace({ tS, value: Float64Array.from(tS, (t) => 120 + 20 * Math.sin(t / 15)) });
	const flat = prepareTrace({ tS, value: new Float64Array(200).fill(120) });
	const curve = shiftCurve(wave, wave, { fromS: -180, toS: 180, stepS: 0.5 });
	expect(curve.shiftS.length).toBe(721);
	expect(curve.r[360]).toBeCloseTo(1, 12);
	expect(curve.r[0]).toBeNaN();
	expect(Array.from(shiftCurve(flat, wave, { fromS: -5, toS: 5, stepS: 1 }).r).every((r) => Number.isNaN(r))).toBe(true);
});

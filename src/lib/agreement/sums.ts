/**
 * Sufficient statistics of a set of pairs: everything that the figures, their intervals and the resampling need, in
 * one small record a session. Records add up, so that a study refreshes by recomputing one session, and a bootstrap
 * never touches a reading.
 *
 * Second moments are kept about the mean, not as raw sums: raw sums lose every digit when a mean is large beside
 * its spread.
 */
import { InvalidInput } from './invalid';

/** Width of a bin of absolute differences, bpm, and how many there are; the last one takes everything above. */
export const ERROR_BIN_BPM = 0.125;
export const ERROR_BINS = 1024;

/** The part of the sums that intervals and resampling need; small and cheap to add. */
export interface PairMoments {
	n: number;
	/** Means of reference, wearable and of the difference wearable − reference, bpm. */
	meanReference: number;
	meanWearable: number;
	meanDifference: number;
	/** Sums of squares and products about these means. */
	squaresReference: number;
	squaresWearable: number;
	products: number;
	squaresDifference: number;
	/** Sum of |d|, bpm, and of |d| / reference (the latter over pairs with a reference other than 0). */
	absolute: number;
	relative: number;
	/** Pairs whose reference is 0: no relative error. */
	zeroReference: number;
	/** Counts of pairs: |d| ≤ 5 bpm; |d| ≤ 5 % and ≤ 10 % of the reference; |d| ≤ the greater of 5 bpm and 10 %. */
	within5Bpm: number;
	within5Pct: number;
	within10Pct: number;
	withinEc13: number;
	/** Wearable within 10 % of half, and of twice, the reference. */
	halfRate: number;
	doubleRate: number;
}

export interface PairSums extends PairMoments {
	/** Pairs by |d|; bin i holds i·w ≤ |d| < (i + 1)·w. */
	errorBins: Uint32Array;
}

/** The sums of no pairs. */
export function emptySums(): PairSums {
	return { ...emptyMoments(), errorBins: new Uint32Array(ERROR_BINS) };
}

function emptyMoments(): PairMoments {
	return {
		n: 0,
		meanReference: 0,
		meanWearable: 0,
		meanDifference: 0,
		squaresReference: 0,
		squaresWearable: 0,
		products: 0,
		squaresDifference: 0,
		absolute: 0,
		relative: 0,
		zeroReference: 0,
		within5Bpm: 0,
		within5Pct: 0,
		within10Pct: 0,
		withinEc13: 0,
		halfRate: 0,
		doubleRate: 0
	};
}

/** Small enough for its columns to stay in the processor's first cache between the two looks at it. */
const BLOCK = 1024;

/**
 * The sums of a set of pairs, in one pass over memory.
 *
 * Each block is centred on its own means and then joined to what came before (Chan TF, Golub GH, LeVeque RJ 1983,
 * The American Statistician 37:242-247), so that neither a large mean nor a wild first reading costs digits.
 *
 * @param reference, wearable bpm, same length, finite
 * @throws InvalidInput when the lengths differ or a value is not finite
 */
export function sumPairs(reference: Float64Array, wearable: Float64Array): PairSums {
	if (reference.length !== wearable.length)
		throw new InvalidInput(
			'lengths-differ',
			`There are ${reference.length} reference values and ${wearable.length} wearable values; pairs need one of each.`
		);
	const sums = emptySums();
	for (let start = 0; start < reference.length; start += BLOCK) {
		addBlock(sums, reference, wearable, start, Math.min(start + BLOCK, reference.length));
	}
	if (!Number.isFinite(sums.squaresReference + sums.squaresWearable))
		throw new InvalidInput('not-finite', 'A reading is not a finite number. Leave pairs without a value out.');
	return sums;
}

function addBlock(sums: PairSums, reference: Float64Array, wearable: Float64Array, start: number, end: number): void {
	const count = end - start;
	let sumX = 0;
	let sumY = 0;
	let sumD = 0;
	for (let i = start; i < end; i++) {
		const x = reference[i];
		const y = wearable[i];
		sumX += x;
		sumY += y;
		sumD += y - x;
	}
	const meanX = sumX / count;
	const meanY = sumY / count;
	const meanD = sumD / count;
	let xx = 0;
	let yy = 0;
	let xy = 0;
	let dd = 0;
	let absolute = 0;
	let relative = 0;
	let within5Bpm = 0;
	let within5Pct = 0;
	let within10Pct = 0;
	let withinEc13 = 0;
	let halfRate = 0;
	let doubleRate = 0;
	const bins = sums.errorBins;
	for (let i = start; i < end; i++) {
		const x = reference[i];
		const y = wearable[i];
		const d = y - x;
		const a = Math.abs(d);
		const size = Math.abs(x);
		const cx = x - meanX;
		const cy = y - meanY;
		const cd = d - meanD;
		xx += cx * cx;
		yy += cy * cy;
		xy += cx * cy;
		dd += cd * cd;
		absolute += a;
		if (size > 0) relative += a / size;
		else sums.zeroReference++;
		// Products of whole numbers, not shares: a tenth has no exact double, and 15 of 150 must count as within 10 %.
		const near = a <= 5 ? 1 : 0;
		const tenth = a * 10 <= size ? 1 : 0;
		within5Bpm += near;
		within10Pct += tenth;
		withinEc13 += near | tenth;
		if (a * 20 <= size) within5Pct++;
		else if (tenth === 0) {
			// Beyond 10 %, so that neither band can overlap with a good reading.
			if (Math.abs(2 * y - x) * 10 <= size) halfRate++;
			else if (Math.abs(y - 2 * x) * 10 <= 2 * size) doubleRate++;
		}
		const bin = a / ERROR_BIN_BPM;
		bins[bin < ERROR_BINS - 1 ? bin | 0 : ERROR_BINS - 1]++;
	}
	joinMoments(sums, count, meanX, meanY, meanD, xx, yy, xy, dd);
	sums.absolute += absolute;
	sums.relative += relative;
	sums.within5Bpm += within5Bpm;
	sums.within5Pct += within5Pct;
	sums.within10Pct += within10Pct;
	sums.withinEc13 += withinEc13;
	sums.halfRate += halfRate;
	sums.doubleRate += doubleRate;
}

function joinMoments(
	into: PairMoments,
	count: number,
	meanX: number,
	meanY: number,
	meanD: number,
	xx: number,
	yy: number,
	xy: number,
	dd: number
): void {
	const n = into.n + count;
	const share = count / n;
	const weight = into.n * share;
	const stepX = meanX - into.meanReference;
	const stepY = meanY - into.meanWearable;
	const stepD = meanD - into.meanDifference;
	into.squaresReference += xx + stepX * stepX * weight;
	into.squaresWearable += yy + stepY * stepY * weight;
	into.products += xy + stepX * stepY * weight;
	into.squaresDifference += dd + stepD * stepD * weight;
	into.meanReference += stepX * share;
	into.meanWearable += stepY * share;
	into.meanDifference += stepD * share;
	into.n = n;
}

function addMoments(into: PairMoments, s: PairMoments): void {
	if (s.n === 0) return;
	joinMoments(
		into,
		s.n,
		s.meanReference,
		s.meanWearable,
		s.meanDifference,
		s.squaresReference,
		s.squaresWearable,
		s.products,
		s.squaresDifference
	);
	into.absolute += s.absolute;
	into.relative += s.relative;
	into.zeroReference += s.zeroReference;
	into.within5Bpm += s.within5Bpm;
	into.within5Pct += s.within5Pct;
	into.within10Pct += s.within10Pct;
	into.withinEc13 += s.withinEc13;
	into.halfRate += s.halfRate;
	into.doubleRate += s.doubleRate;
}

/** The sums of several sets together; equal to the sums of all their pairs. The sets are not changed. */
export function mergeSums(sets: readonly PairSums[]): PairSums {
	const whole = emptySums();
	for (const s of sets) {
		addMoments(whole, s);
		if (s.n > 0) for (let i = 0; i < ERROR_BINS; i++) whole.errorBins[i] += s.errorBins[i];
	}
	return whole;
}

/** As `mergeSums`, without the counts by size of the difference. */
export function mergeMoments(sets: readonly PairMoments[]): PairMoments {
	const whole = emptyMoments();
	for (const s of sets) addMoments(whole, s);
	return whole;
}

/**
 * For every set, the moments of all the others together. Joins what stands before and what stands after each set, so
 * the work grows with the number of sets and no digits are lost by taking one away.
 */
export function leaveOneOut(sets: readonly PairMoments[]): PairMoments[] {
	const joined = (a: PairMoments, b: PairMoments): PairMoments => {
		const both = { ...a };
		addMoments(both, b);
		return both;
	};
	const after: PairMoments[] = [];
	let tail = emptyMoments();
	for (let i = sets.length - 1; i >= 0; i--) {
		after[i] = tail;
		tail = joined(tail, sets[i]);
	}
	let before = emptyMoments();
	return sets.map((set, i) => {
		const rest = joined(before, after[i]);
		before = joined(before, set);
		return rest;
	});
}

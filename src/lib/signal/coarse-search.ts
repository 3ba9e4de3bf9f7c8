/**
 * The first look for a shift: every overlap of two traces at once.
 *
 * Score = ρ₈ + ρ₅ + weight · A. ρ are plain correlations of clipped smoothed slopes over their total energies: clipping
 * keeps one onset fault or cadence lock, which holds most of the variance of a session, from deciding alone. A is the
 * mean bounded agreement of levels, an M-estimator written as a correlation: a Gaussian kernel of the difference is a
 * short cosine series, and each of its terms is a correlation of unit phasors. All terms are summed as spectra and
 * come back through one inverse transform.
 *
 * Masked correlation in the Fourier domain: Padfield D (2012) IEEE Trans Image Process 21:2706-2718.
 */
import { complexBuffer, fastSize, inverseReal, transformOf } from './fft-plan';
import type { SecondGrid } from './second-grid';
import type { ShiftCandidate } from './shift';
import { clipped, smoothedSlope } from './slopes';

/** A smoothed slope and how far it counts: mean over ±half between reach seconds after and before, at most ±limit. */
export interface SlopeSpec {
	halfS: number;
	reachS: number;
	limit: number;
}

export interface CoarseOptions {
	/** Width of the agreement kernel, in units of the trace. */
	sigma: number;
	/** Period of the cosine series: differences of a whole period look like none. A power of two. */
	period: number;
	/** Weight of level agreement against the two slope correlations. */
	levelWeight: number;
	slopes: readonly [SlopeSpec, SlopeSpec];
}

export const HEART_RATE_SEARCH: CoarseOptions = {
	sigma: 5,
	period: 128,
	levelWeight: 6,
	slopes: [
		{ halfS: 8, reachS: 10, limit: 2 },
		{ halfS: 5, reachS: 6, limit: 2.5 }
	]
};

/** Both traces together longer than this are searched on every fourth second instead of every second one, s. */
const LONG_S = 4 * 3600;

export interface CoarseResult {
	/** Score at each lag; shift of lag k is `firstShiftS + k * stepS`. */
	score: Float64Array;
	firstShiftS: number;
	stepS: number;
}

/** Score of every shift at which the two traces overlap at all. */
export function coarseSearch(reference: SecondGrid, wearable: SecondGrid, options: CoarseOptions = HEART_RATE_SEARCH): CoarseResult {
	const { sigma, period, levelWeight, slopes } = options;
	const stepS = reference.value.length + wearable.value.length > LONG_S ? 4 : 2;
	const nr = Math.ceil(reference.value.length / stepS);
	const nw = Math.ceil(wearable.value.length / stepS);
	const size = fastSize(nr + nw);
	const plan = transformOf(size);
	const input = complexBuffer(size, 'input');
	const r = complexBuffer(size, 'first');
	const w = complexBuffer(size, 'second');
	const sum = complexBuffer(size, 'sum');

	loadSlopes(input, reference.value, slopes, stepS);
	plan.transform(r, input);
	loadSlopes(input, wearable.value, slopes, stepS);
	plan.transform(w, input);
	for (let k = 0; k < 2 * size; k += 2) {
		sum[k] = r[k] * w[k] + r[k + 1] * w[k + 1];
		sum[k + 1] = r[k + 1] * w[k] - r[k] * w[k + 1];
	}

	const least = Math.max(1, Math.min(countValid(reference, stepS), countValid(wearable, stepS)));
	const terms = Math.ceil((2.4 * period) / (2 * Math.PI * sigma));
	const weights = Array.from({ length: terms + 1 }, (_, j) => (j === 0 ? 1 : 2) * Math.exp(-(((2 * Math.PI * j * sigma) / period) ** 2) / 2));
	const atZero = weights.reduce((a, b) => a + b, 0);
	const circle = circleOf(period);
	const stepsR = circleSteps(reference.value, stepS);
	const stepsW = circleSteps(wearable.value, stepS);
	for (let j = 0; j <= terms; j++) {
		const weight = (levelWeight * weights[j]) / (atZero * least);
		loadPhasors(input, stepsR, circle, j);
		plan.transform(r, input);
		loadPhasors(input, stepsW, circle, j);
		plan.transform(w, input);
		for (let k = 0; k < 2 * size; k += 2) {
			sum[k] += weight * (r[k] * w[k] + r[k + 1] * w[k + 1]);
			sum[k + 1] += weight * (r[k + 1] * w[k] - r[k] * w[k + 1]);
		}
	}

	// Only the real part of the column is wanted: that of the spectrum's mean with its own mirror image.
	for (let k = 0; k <= size / 2; k++) {
		const m = k === 0 ? 0 : size - k;
		input[2 * k] = (sum[2 * k] + sum[2 * m]) / 2;
		input[2 * k + 1] = (sum[2 * k + 1] - sum[2 * m + 1]) / 2;
	}
	inverseReal(size, input, r);
	const score = new Float64Array(nr + nw - 1);
	score.set(r.subarray(size - (nw - 1), size), 0);
	score.set(r.subarray(0, nr), nw - 1);
	return { score, firstShiftS: reference.startS - wearable.startS - (nw - 1) * stepS, stepS };
}

/** Both clipped slopes, each of total energy 1, as real and imaginary part. */
function loadSlopes(input: Float64Array, value: Float64Array, slopes: readonly [SlopeSpec, SlopeSpec], stepS: number): void {
	input.fill(0);
	slopes.forEach(({ halfS, reachS, limit }, part) => {
		const slope = clipped(smoothedSlope(value, halfS, reachS), limit);
		let energy = 0;
		for (let i = 0; i < slope.length; i += stepS) energy += slope[i] ** 2;
		const scale = energy > 0 ? 1 / Math.sqrt(energy) : 0;
		for (let i = 0, k = part; i < slope.length; i += stepS, k += 2) input[k] = slope[i] * scale;
	});
}

/** Steps of a value's phase; levels are read to a quarter of a unit. */
const STEPS_PER_UNIT = 4;

/** Cosine and sine of every step round one period. */
function circleOf(period: number): { cos: Float64Array; sin: Float64Array } {
	const n = period * STEPS_PER_UNIT;
	return {
		cos: Float64Array.from({ length: n }, (_, i) => Math.cos((2 * Math.PI * i) / n)),
		sin: Float64Array.from({ length: n }, (_, i) => Math.sin((2 * Math.PI * i) / n))
	};
}

/** Each searched second's value in steps; −1 where there is none. */
function circleSteps(value: Float64Array, stepS: number): Int32Array {
	const out = new Int32Array(Math.ceil(value.length / stepS)).fill(-1);
	for (let i = 0, k = 0; i < value.length; i += stepS, k++) if (value[i] === value[i]) out[k] = Math.max(0, Math.round(value[i] * STEPS_PER_UNIT));
	return out;
}

function loadPhasors(input: Float64Array, steps: Int32Array, circle: { cos: Float64Array; sin: Float64Array }, turns: number): void {
	const round = circle.cos.length - 1;
	for (let i = 0, k = 0; i < steps.length; i++, k += 2) {
		if (steps[i] < 0) {
			input[k] = input[k + 1] = 0;
			continue;
		}
		const at = (steps[i] * turns) & round;
		input[k] = circle.cos[at];
		input[k + 1] = circle.sin[at];
	}
	input.fill(0, 2 * steps.length);
}

function countValid(grid: SecondGrid, stepS: number): number {
	let n = 0;
	for (let i = 0; i < grid.value.length; i += stepS) if (!Number.isNaN(grid.value[i])) n++;
	return n;
}

/** At most six candidates are kept. */
const MOST_PEAKS = 6;
/** Candidates stand at least this far apart, s. */
const APART_S = 15;

/**
 * Local maxima of the score, best first, at least 15 s from each other.
 * @param withinS keep only shifts between these, s
 */
export function peaksOf({ score, firstShiftS, stepS }: CoarseResult, withinS: readonly [number, number] = [-Infinity, Infinity]): ShiftCandidate[] {
	const [fromS, toS] = withinS;
	const first = Math.max(0, Math.ceil((fromS - firstShiftS) / stepS));
	const last = Math.min(score.length - 1, Math.floor((toS - firstShiftS) / stepS));
	const maxima: number[] = [];
	for (let k = first; k <= last; k++) if ((k === first || score[k] >= score[k - 1]) && (k === last || score[k] > score[k + 1])) maxima.push(k);
	maxima.sort((a, b) => score[b] - score[a]);
	const found: ShiftCandidate[] = [];
	for (const k of maxima) {
		const shiftS = firstShiftS + k * stepS;
		if (found.some((f) => Math.abs(f.shiftS - shiftS) < APART_S)) continue;
		found.push({ shiftS, score: score[k] });
		if (found.length === MOST_PEAKS) break;
	}
	return found;
}

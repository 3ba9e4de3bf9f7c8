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
import { fftPlan, powerOfTwo } from './fft-plan';
import type { SecondGrid } from './second-grid';
import type { ShiftCandidate } from './shift';
import { clipped, smoothedSlope } from './slopes';

export interface CoarseOptions {
	/** Grid step of the search, s. */
	stepS: number;
	/** Width of the agreement kernel, in units of the trace. */
	sigma: number;
	/** Period of the cosine series: differences of a whole period look like none. */
	period: number;
	/** Weight of level agreement against the two slope correlations. */
	levelWeight: number;
	/** Limits of the two slopes: ±8 s means 10 s to either side, and ±5 s means 6 s to either side. */
	slopeLimits: [number, number];
}

export const HEART_RATE_SEARCH: CoarseOptions = { stepS: 2, sigma: 5, period: 128, levelWeight: 6, slopeLimits: [2, 2.5] };

export interface CoarseResult {
	/** Score at each lag; shift of lag k is `firstShiftS + k * stepS`. */
	score: Float64Array;
	firstShiftS: number;
	stepS: number;
}

/** Score of every shift at which the two traces overlap at all. */
export function coarseSearch(reference: SecondGrid, wearable: SecondGrid, options: CoarseOptions = HEART_RATE_SEARCH): CoarseResult {
	const { stepS, sigma, period, levelWeight, slopeLimits } = options;
	const nr = Math.ceil(reference.value.length / stepS);
	const nw = Math.ceil(wearable.value.length / stepS);
	const size = powerOfTwo(nr + nw);
	const plan = fftPlan(size);
	const input = new Float64Array(2 * size);
	const r = new Float64Array(2 * size);
	const w = new Float64Array(2 * size);
	const sum = new Float64Array(2 * size);

	/** Adds weight · R conj(W) to the sum of spectra. */
	const accumulate = (weight: number) => {
		for (let k = 0; k < 2 * size; k += 2) {
			sum[k] += weight * (r[k] * w[k] + r[k + 1] * w[k + 1]);
			sum[k + 1] += weight * (r[k + 1] * w[k] - r[k] * w[k + 1]);
		}
	};

	const slopesOf = (grid: SecondGrid) => ({
		wide: clipped(smoothedSlope(grid.value, 8, 10), slopeLimits[0]),
		narrow: clipped(smoothedSlope(grid.value, 5, 6), slopeLimits[1])
	});
	const sr = slopesOf(reference);
	const sw = slopesOf(wearable);
	loadSlopes(input, sr, stepS);
	plan.transform(r, input);
	loadSlopes(input, sw, stepS);
	plan.transform(w, input);
	accumulate(1);

	const least = Math.max(1, Math.min(countValid(reference, stepS), countValid(wearable, stepS)));
	const terms = Math.ceil((2.4 * period) / (2 * Math.PI * sigma));
	const weights = Array.from({ length: terms + 1 }, (_, j) => (j === 0 ? 1 : 2) * Math.exp(-(((2 * Math.PI * j * sigma) / period) ** 2) / 2));
	const atZero = weights.reduce((a, b) => a + b, 0);
	for (let j = 0; j <= terms; j++) {
		loadPhasors(input, reference.value, stepS, (2 * Math.PI * j) / period);
		plan.transform(r, input);
		loadPhasors(input, wearable.value, stepS, (2 * Math.PI * j) / period);
		plan.transform(w, input);
		accumulate((levelWeight * weights[j]) / (atZero * least));
	}

	plan.inverseTransform(r, sum);
	const lags = nr + nw - 1;
	const score = new Float64Array(lags);
	for (let k = 0; k < lags; k++) score[k] = r[2 * ((k - (nw - 1) + size) & (size - 1))];
	return { score, firstShiftS: reference.startS - wearable.startS - (nw - 1) * stepS, stepS };
}

function loadSlopes(input: Float64Array, slopes: { wide: Float64Array; narrow: Float64Array }, stepS: number): void {
	input.fill(0);
	let wide = 0;
	let narrow = 0;
	for (let i = 0; i < slopes.wide.length; i += stepS) {
		wide += slopes.wide[i] ** 2;
		narrow += slopes.narrow[i] ** 2;
	}
	const a = wide > 0 ? 1 / Math.sqrt(wide) : 0;
	const b = narrow > 0 ? 1 / Math.sqrt(narrow) : 0;
	for (let i = 0, k = 0; i < slopes.wide.length; i += stepS, k += 2) {
		input[k] = slopes.wide[i] * a;
		input[k + 1] = slopes.narrow[i] * b;
	}
}

function loadPhasors(input: Float64Array, value: Float64Array, stepS: number, turn: number): void {
	input.fill(0);
	for (let i = 0, k = 0; i < value.length; i += stepS, k += 2) {
		const v = value[i];
		if (Number.isNaN(v)) continue;
		input[k] = turn === 0 ? 1 : Math.cos(turn * v);
		input[k + 1] = turn === 0 ? 0 : Math.sin(turn * v);
	}
}

function countValid(grid: SecondGrid, stepS: number): number {
	let n = 0;
	for (let i = 0; i < grid.value.length; i += stepS) if (!Number.isNaN(grid.value[i])) n++;
	return n;
}

/** Local maxima of the score, best first, at least `apartS` from each other. */
export function peaksOf({ score, firstShiftS, stepS }: CoarseResult, most = 6, apartS = 15): ShiftCandidate[] {
	const maxima: number[] = [];
	for (let k = 0; k < score.length; k++)
		if ((k === 0 || score[k] >= score[k - 1]) && (k === score.length - 1 || score[k] > score[k + 1])) maxima.push(k);
	maxima.sort((a, b) => score[b] - score[a]);
	const found: ShiftCandidate[] = [];
	for (const k of maxima) {
		const shiftS = firstShiftS + k * stepS;
		if (found.some((f) => Math.abs(f.shiftS - shiftS) < apartS)) continue;
		found.push({ shiftS, score: score[k] });
		if (found.length === most) break;
	}
	return found;
}

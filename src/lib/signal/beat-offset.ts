/**
 * The clock offset from the beats themselves: two lists of RR intervals of one heart show the same pattern, beat by
 * beat. Short runs of the wearable's beats are looked for in the reference's list; each that is found gives one
 * offset, and the line through them gives offset and drift.
 */
import { heartRateFromRr, soundIntervals } from '../formats/heart-rate-from-rr';
import type { Trace } from '../formats/recording';
import { searchBestFitShift } from './best-fit-shift';
import { median, theilSen } from './theil-sen';

export interface BeatOffset {
	/** Seconds to add to the wearable's stamps at the middle of the matched beats. */
	offsetS: number;
	/** 95 % interval, s. */
	ci95: [number, number];
	/** How much faster the reference's clock runs, millionths, with its 95 % interval; null when the beats span less than 20 min. */
	driftPpm: number | null;
	driftCi95: [number, number] | null;
	/** Runs of beats that were found, of those that were looked for. */
	found: number;
	lookedFor: number;
}

/** Beats of one run, and the step from run to run. */
const RUN = 24;
const STEP = 12;
/** Runs are looked for this far from the shift that the heart rates show, s. */
const REACH_S = 6;
/** Mean difference of the intervals at which a run counts as found, ms, and how clearly it must beat the next best place. */
const FOUND_MS = 20;
const CLEARLY = 0.6;
/** One interval's difference counts to this much, ms: a missed beat is one difference, not all. */
const BOUND_MS = 120;
const LEAST_RUNS = 8;
/** Share of the found runs that must lie on one line, and how near to it, s. */
const LEAST_ON_LINE = 0.7;
const ON_LINE_S = 0.15;
/** Recorders anchor beats to records of whole seconds, and a pulse reaches the wrist 0.1 to 0.3 s after the heart. Common practice, no source. */
const ANCHOR_HALF_WIDTH_S = 0.5;
const LEAST_DRIFT_SPAN_S = 1200;

/**
 * @param reference RR intervals of the reference, ms at the time of the beat that ends each
 * @param wearable those of the wearable
 * @returns null when the two lists show no common pattern
 */
export function beatOffset(reference: Pick<Trace, 'tS' | 'value'>, wearable: Pick<Trace, 'tS' | 'value'>): BeatOffset | null {
	const aroundS = roughShift(reference, wearable);
	if (aroundS === null) return null;
	const sound = soundIntervals(wearable.value);
	const atS: number[] = [];
	const offsetS: number[] = [];
	let lookedFor = 0;
	let from = 0;
	for (let j = 0; j + RUN <= wearable.tS.length; j += STEP) {
		if (!isWhole(wearable.tS, sound, j)) continue;
		lookedFor++;
		const expected = wearable.tS[j] + aroundS;
		while (from < reference.tS.length && reference.tS[from] < expected - REACH_S) from++;
		const at = findRun(reference, wearable.value, j, from, expected + REACH_S);
		if (at === null) continue;
		atS.push(wearable.tS[j]);
		offsetS.push(median(Array.from({ length: RUN }, (_, k) => reference.tS[at + k] - wearable.tS[j + k])));
	}
	if (offsetS.length < LEAST_RUNS) return null;
	const middleS = (atS[0] + atS[atS.length - 1]) / 2;
	const x = atS.map((t) => t - middleS);
	const line = theilSen(x, offsetS);
	const kept = x.map((_, i) => i).filter((i) => Math.abs(offsetS[i] - line.intercept - line.slope * x[i]) <= ON_LINE_S);
	if (kept.length < LEAST_RUNS || kept.length < LEAST_ON_LINE * offsetS.length) return null;
	const fit = leastSquares(kept.map((i) => x[i]), kept.map((i) => offsetS[i]));
	const half = Math.hypot(1.96 * fit.interceptSe, ANCHOR_HALF_WIDTH_S);
	const drifts = x[kept[kept.length - 1]] - x[kept[0]] >= LEAST_DRIFT_SPAN_S;
	// Neighbouring runs share beats: the plain standard error is too small by the root of two.
	const driftHalf = 1.96 * Math.SQRT2 * fit.slopeSe * 1e6;
	return {
		offsetS: fit.intercept,
		ci95: [fit.intercept - half, fit.intercept + half],
		driftPpm: drifts ? fit.slope * 1e6 : null,
		driftCi95: drifts ? [fit.slope * 1e6 - driftHalf, fit.slope * 1e6 + driftHalf] : null,
		found: kept.length,
		lookedFor
	};
}

/** Shift of the two heart rates, each read from its beats without lag. */
function roughShift(reference: Pick<Trace, 'tS' | 'value'>, wearable: Pick<Trace, 'tS' | 'value'>): number | null {
	const rate = (trace: Pick<Trace, 'tS' | 'value'>) => {
		const { tS, bpm } = heartRateFromRr(trace.tS, trace.value);
		return { tS: Float64Array.from(tS), value: Float64Array.from(bpm) };
	};
	const { evidence } = searchBestFitShift(rate(reference), rate(wearable));
	return evidence?.refined.plainS ?? null;
}

/** A run without a gap or an unsound interval. */
function isWhole(tS: Float64Array, sound: Uint8Array, from: number): boolean {
	for (let k = 0; k < RUN; k++) if (!sound[from + k] || (k > 0 && tS[from + k] - tS[from + k - 1] > 2.5)) return false;
	return true;
}

/** Place in the reference's list where the run fits best; null when nowhere well, or in two places alike. */
function findRun(reference: Pick<Trace, 'tS' | 'value'>, rrMs: Float64Array, j: number, from: number, untilS: number): number | null {
	let best = Infinity;
	let next = Infinity;
	let at = -1;
	for (let i = from; i + RUN <= reference.tS.length && reference.tS[i] <= untilS; i++) {
		let sum = 0;
		for (let k = 0; k < RUN; k++) sum += Math.min(BOUND_MS, Math.abs(reference.value[i + k] - rrMs[j + k]));
		const cost = sum / RUN;
		if (cost < best) {
			next = best;
			best = cost;
			at = i;
		} else if (cost < next) next = cost;
	}
	return best <= FOUND_MS && best <= CLEARLY * next ? at : null;
}

function leastSquares(x: number[], y: number[]): { intercept: number; slope: number; interceptSe: number; slopeSe: number } {
	const n = x.length;
	const mx = x.reduce((a, b) => a + b, 0) / n;
	const my = y.reduce((a, b) => a + b, 0) / n;
	let xx = 0;
	let xy = 0;
	for (let i = 0; i < n; i++) {
		xx += (x[i] - mx) ** 2;
		xy += (x[i] - mx) * (y[i] - my);
	}
	const slope = xx > 0 ? xy / xx : 0;
	const intercept = my - slope * mx;
	let rest = 0;
	for (let i = 0; i < n; i++) rest += (y[i] - intercept - slope * x[i]) ** 2;
	const variance = rest / Math.max(1, n - 2);
	return { intercept, slope, interceptSe: Math.sqrt(variance * (1 / n + (xx > 0 ? mx ** 2 / xx : 0))), slopeSe: xx > 0 ? Math.sqrt(variance / xx) : Infinity };
}

/**
 * From a coarse shift to a fraction of a second, by comparing the wearable with the reference as several devices would
 * smooth it.
 *
 * A device that smooths looks late and flat. Fitting it to the bare reference finds a shift somewhere inside its
 * response; fitting it to the reference through the right smoother finds the sum of clock and delay. The smoother with
 * the least loss decides; its own delay is added back.
 */
import type { SecondGrid } from './second-grid';
import { smoothedSlope } from './slopes';

export interface Smoother {
	/** `none`, `first order 7 s`, `average 9 s`. */
	name: string;
	/** Mean delay of the discrete smoother, s. */
	delayS: number;
	apply(value: Float64Array): Float64Array;
}

function firstOrder(tauS: number): Smoother {
	const keep = Math.exp(-1 / tauS);
	return {
		name: `first order ${tauS} s`,
		delayS: 1 / (Math.exp(1 / tauS) - 1),
		apply(value) {
			const out = new Float64Array(value.length);
			let y = NaN;
			for (let i = 0; i < value.length; i++) {
				const v = value[i];
				if (Number.isNaN(v)) {
					out[i] = NaN;
					// After a gap the smoother's memory is of no use.
					if (i > 0 && Number.isNaN(value[i - 1])) y = NaN;
					continue;
				}
				y = Number.isNaN(y) ? v : keep * y + (1 - keep) * v;
				out[i] = y;
			}
			return out;
		}
	};
}

function average(windowS: number): Smoother {
	return {
		name: `average ${windowS} s`,
		delayS: (windowS - 1) / 2,
		apply(value) {
			const out = new Float64Array(value.length);
			let sum = 0;
			let count = 0;
			for (let i = 0; i < value.length; i++) {
				if (!Number.isNaN(value[i])) {
					sum += value[i];
					count++;
				}
				if (i >= windowS && !Number.isNaN(value[i - windowS])) {
					sum -= value[i - windowS];
					count--;
				}
				out[i] = !Number.isNaN(value[i]) && 2 * count > windowS ? sum / count : NaN;
			}
			return out;
		}
	};
}

export const NO_SMOOTHER: Smoother = { name: 'none', delayS: 0, apply: (value) => value };
export const RESPONSE_BANK: readonly Smoother[] = [
	NO_SMOOTHER,
	...[2, 4, 7, 11, 15].map(firstOrder),
	...[5, 9, 13, 18].map(average)
];

/** Bounded losses: half of the loss of a level is reached at 7 bpm, of a slope at 5 bpm. */
const LEVEL_SQ = 49;
const SLOPE_SQ = 25;

/** A grid with its slopes, ready to be compared. */
export interface Compared {
	startS: number;
	value: Float64Array;
	slope: Float64Array;
}

export const compared = (startS: number, value: Float64Array): Compared => ({ startS, value, slope: smoothedSlope(value, 8, 10) });

/**
 * Mean bounded disagreement when the wearable's stamps move by `shiftS`; linear between the reference's seconds.
 * @returns Infinity when fewer than 30 seconds can be compared
 */
export function disagreement(reference: Compared, wearable: Compared, shiftS: number, from = 0, to = wearable.value.length): number {
	const offset = wearable.startS + shiftS - reference.startS;
	const whole = Math.floor(offset);
	const part = offset - whole;
	let level = 0;
	let levels = 0;
	let slope = 0;
	let slopes = 0;
	const first = Math.max(from, -whole);
	const last = Math.min(to, reference.value.length - 1 - whole);
	for (let i = first; i < last; i++) {
		const k = i + whole;
		const w = wearable.value[i];
		const r = reference.value[k] * (1 - part) + reference.value[k + 1] * part;
		const e = w - r;
		if (e === e) {
			const q = e * e;
			level += q / (q + LEVEL_SQ);
			levels++;
		}
		const g = wearable.slope[i] - (reference.slope[k] * (1 - part) + reference.slope[k + 1] * part);
		if (g === g) {
			const q = g * g;
			slope += q / (q + SLOPE_SQ);
			slopes++;
		}
	}
	if (levels < 30) return Infinity;
	return level / levels + (slopes > 0 ? slope / slopes : 1);
}

export interface Refined {
	/** Shift that puts the clocks together and forgives the device's delay, by the sum of delays, s. */
	totalS: number;
	/** Shift of least disagreement with the bare reference, s. */
	plainS: number;
	loss: number;
	smoother: Smoother;
	/** The least loss stood at the edge of what was looked at. */
	atEdge: boolean;
}

/** Refines a coarse shift within ±6 s. */
export function refine(reference: SecondGrid, wearable: SecondGrid, coarseS: number, bank: readonly Smoother[] = RESPONSE_BANK): Refined {
	const w = compared(wearable.startS, wearable.value);
	let best: { shiftS: number; loss: number; smoother: Smoother; atEdge: boolean } | null = null;
	let plainS = coarseS;
	for (const smoother of bank) {
		const r = compared(reference.startS, smoother.apply(reference.value));
		// Through a smoother the reference is later: the matching shift is larger by the smoother's delay.
		const found = leastLoss(r, w, coarseS + 0.85 * smoother.delayS);
		if (smoother === NO_SMOOTHER) plainS = found.shiftS;
		if (!best || found.loss < best.loss) best = { ...found, smoother };
	}
	if (!best) return { totalS: coarseS, plainS, loss: Infinity, smoother: NO_SMOOTHER, atEdge: true };
	return { totalS: best.shiftS - best.smoother.delayS, plainS, loss: best.loss, smoother: best.smoother, atEdge: best.atEdge };
}

const REACH_S = 7;

function leastLoss(r: Compared, w: Compared, aroundS: number): { shiftS: number; loss: number; atEdge: boolean } {
	const centre = Math.round(aroundS);
	let shiftS = centre;
	let loss = Infinity;
	for (let s = centre - REACH_S; s <= centre + REACH_S; s++) {
		const l = disagreement(r, w, s);
		if (l < loss) {
			loss = l;
			shiftS = s;
		}
	}
	const atEdge = Math.abs(shiftS - centre) >= REACH_S;
	const whole = shiftS;
	for (let s = whole - 1.25; s <= whole + 1.26; s += 0.25) {
		if (s === whole) continue;
		const l = disagreement(r, w, s);
		if (l < loss) {
			loss = l;
			shiftS = s;
		}
	}
	const before = disagreement(r, w, shiftS - 0.25);
	const after = disagreement(r, w, shiftS + 0.25);
	const curve = before - 2 * loss + after;
	if (curve > 0 && Number.isFinite(curve)) shiftS += Math.max(-0.125, Math.min(0.125, (0.125 * (before - after)) / curve));
	return { shiftS, loss, atEdge };
}

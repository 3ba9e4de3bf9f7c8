/**
 * Bounded disagreement of two heart rates at a shift: what every close comparison rests on.
 *
 * Level and slope count alike. Both losses are bounded (Geman and McClure 1985, e² / (e² + c²)), so that a fault counts
 * for its length and not for its size.
 */
import { smoothedSlope } from './slopes';

/** What counts as far apart, in the unit of the values compared. */
export interface LossScale {
	/** Slopes are differences of the mean over ±half between reach seconds after and before. */
	slopeHalfS: number;
	slopeReachS: number;
	/** Squares of the differences at which half of the loss is reached: of levels, of slopes. */
	levelSq: number;
	slopeSq: number;
}

/** Half of the loss of a level is reached at 7 bpm, of a slope (over 20 s) at 5 bpm. */
export const HEART_RATE_SCALE: LossScale = { slopeHalfS: 8, slopeReachS: 10, levelSq: 49, slopeSq: 25 };
/** Fewer seconds than this cannot be compared. */
const LEAST_COMPARED_S = 30;

/** A grid with its slopes, ready to be compared with another of the same scale. */
export interface Compared {
	startS: number;
	value: Float64Array;
	slope: Float64Array;
	scale: LossScale;
}

/** @param value one value a second, NaN where there is none */
export const compared = (startS: number, value: Float64Array, scale: LossScale = HEART_RATE_SCALE): Compared => ({
	startS,
	value,
	slope: smoothedSlope(value, scale.slopeHalfS, scale.slopeReachS),
	scale
});

/**
 * Mean bounded disagreement when the wearable's stamps move by `shiftS`; linear between the reference's seconds.
 * @param every look at one second in this many only (long recordings)
 * @returns 0 (the same) to 2; Infinity when fewer than 30 seconds can be compared
 */
export function disagreement(reference: Compared, wearable: Compared, shiftS: number, every = 1): number {
	const offset = wearable.startS + shiftS - reference.startS;
	const whole = Math.floor(offset);
	const part = offset - whole;
	const rest = 1 - part;
	const { value: rv, slope: rs } = reference;
	const { value: wv, slope: ws } = wearable;
	const { levelSq, slopeSq } = wearable.scale;
	let level = 0;
	let levels = 0;
	let slope = 0;
	let slopes = 0;
	const last = Math.min(wv.length, rv.length - 1 - whole);
	for (let i = Math.max(0, -whole), k = i + whole; i < last; i += every, k += every) {
		const e = wv[i] - (rv[k] * rest + rv[k + 1] * part);
		const q = e * e;
		if (q === q) {
			level += q / (q + levelSq);
			levels++;
		}
		const g = ws[i] - (rs[k] * rest + rs[k + 1] * part);
		const p = g * g;
		if (p === p) {
			slope += p / (p + slopeSq);
			slopes++;
		}
	}
	if (levels * every < LEAST_COMPARED_S) return Infinity;
	return level / levels + (slopes > 0 ? slope / slopes : 1);
}

/** Sums of bounded agreement of every block of the wearable at every shift, and the seconds that they rest on. */
export interface BlockSums {
	/** blocks × shifts, row by row. */
	sum: Float64Array;
	count: Float64Array;
	blocks: number;
	shifts: number;
}

/** As `disagreement`, turned round (2 = the same) and kept per block of `blockS` seconds. */
export function blockAgreement(reference: Compared, wearable: Compared, shiftsS: readonly number[], blockS: number, every = 1): BlockSums {
	const blocks = Math.max(1, Math.ceil(wearable.value.length / blockS));
	const shifts = shiftsS.length;
	const sum = new Float64Array(blocks * shifts);
	const count = new Float64Array(blocks * shifts);
	const { value: rv, slope: rs } = reference;
	const { value: wv, slope: ws } = wearable;
	const { levelSq, slopeSq } = wearable.scale;
	for (let s = 0; s < shifts; s++) {
		const offset = wearable.startS + shiftsS[s] - reference.startS;
		const whole = Math.floor(offset);
		const part = offset - whole;
		const rest = 1 - part;
		const last = Math.min(wv.length, rv.length - 1 - whole);
		let i = Math.max(0, -whole);
		while (i < last) {
			const block = Math.floor(i / blockS);
			const end = Math.min(last, (block + 1) * blockS);
			let agreed = 0;
			let seconds = 0;
			for (; i < end; i += every) {
				const k = i + whole;
				const e = wv[i] - (rv[k] * rest + rv[k + 1] * part);
				const q = e * e;
				if (q !== q) continue;
				const g = ws[i] - (rs[k] * rest + rs[k + 1] * part);
				const p = g * g;
				agreed += levelSq / (q + levelSq) + (p === p ? slopeSq / (p + slopeSq) : 0.5);
				seconds++;
			}
			sum[block * shifts + s] = agreed;
			count[block * shifts + s] = seconds;
		}
	}
	return { sum, count, blocks, shifts };
}

/** Mean of c² / (c² + e²) over the seconds that can be compared at the nearest whole second: 1 = the same, 0.5 = c apart (7 bpm). */
export function levelAgreement(reference: Compared, wearable: Compared, shiftS: number): { mean: number; n: number } {
	const { levelSq } = wearable.scale;
	let sum = 0;
	let n = 0;
	const whole = Math.round(wearable.startS + shiftS - reference.startS);
	const last = Math.min(wearable.value.length, reference.value.length - whole);
	for (let i = Math.max(0, -whole); i < last; i++) {
		const e = wearable.value[i] - reference.value[i + whole];
		if (e !== e) continue;
		sum += levelSq / (e * e + levelSq);
		n++;
	}
	return { mean: n > 0 ? sum / n : 0, n };
}

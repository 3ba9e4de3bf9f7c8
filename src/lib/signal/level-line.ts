/**
 * How a wearable's levels stand to the reference's: a device may read high or low throughout without being a second
 * off. A robust straight line through both is found at a shift, and taken out before the shift is looked for closely.
 */
import type { Compared } from './disagreement';

/** wearable = meanWearable + gain × (reference − meanReference), bpm. */
export interface LevelLine {
	gain: number;
	meanReference: number;
	meanWearable: number;
}

/** Devices read no further off than this throughout: beyond it the two are no pair. */
const GAIN_LIMIT = 1.3;
const BIAS_LIMIT_BPM = 30;
/**
 * A wearable that reads less than this off at the mean reads right for our purposes, bpm. Ups and downs that seem
 * enlarged or reduced about a right mean are no sign of such a device: faults and smoothing leave them behind.
 */
const NEGLIGIBLE_BIAS_BPM = 3;
/** A gain this near to 1 is not worth a word. */
const NEGLIGIBLE_GAIN = 0.025;
/** Residuals count by Geman and McClure's weights; their scale narrows from round to round, bpm. */
const SCALES = [20, 14, 10, 8, 7, 7];
/** Spread of levels below which the gain is held at 1, bpm: a level session shows none. */
const HELD_SD_BPM = 4;

/**
 * Robust line of levels at a shift (nearest whole second); null when it is identity for all purposes, or no line at all.
 * @param reference smoothed as the wearable is thought to smooth
 * @param shiftS shift that matches them, s
 */
export function levelLine(reference: Compared, wearable: Compared, shiftS: number, every = 1): LevelLine | null {
	const whole = Math.round(wearable.startS + shiftS - reference.startS);
	const x: number[] = [];
	const y: number[] = [];
	const last = Math.min(wearable.value.length, reference.value.length - whole);
	for (let i = Math.max(0, -whole); i < last; i += every) {
		const r = reference.value[i + whole];
		const w = wearable.value[i];
		if (r !== r || w !== w) continue;
		x.push(r);
		y.push(w);
	}
	if (x.length < 60) return null;
	let gain = 1;
	const differences = Float64Array.from(x, (r, i) => y[i] - r).sort();
	let meanReference = 0;
	let meanWearable = differences[differences.length >> 1];
	for (const scale of SCALES) {
		let [weights, sx, sy, xx, xy] = [0, 0, 0, 0, 0];
		for (let i = 0; i < x.length; i++) {
			const e = y[i] - meanWearable - gain * (x[i] - meanReference);
			const weight = (scale ** 2 / (scale ** 2 + e * e)) ** 2;
			weights += weight;
			sx += weight * x[i];
			sy += weight * y[i];
			xx += weight * x[i] * x[i];
			xy += weight * x[i] * y[i];
		}
		meanReference = sx / weights;
		meanWearable = sy / weights;
		const held = HELD_SD_BPM ** 2;
		gain = (xy / weights - meanReference * meanWearable + held) / (xx / weights - meanReference ** 2 + held);
	}
	return usable({ gain, meanReference, meanWearable });
}

/** The wearable's values with the line taken out. */
export function withoutLine(value: Float64Array, { gain, meanReference, meanWearable }: LevelLine): Float64Array {
	return value.map((v) => meanReference + (v - meanWearable) / gain);
}

/** `6 bpm high at 142 bpm`: the line in words. */
export function lineWords({ gain, meanReference, meanWearable }: LevelLine): string {
	const bias = meanWearable - meanReference;
	return `${Math.abs(bias).toFixed(0)} bpm ${bias >= 0 ? 'high' : 'low'} at ${meanReference.toFixed(0)} bpm${Math.abs(gain - 1) > NEGLIGIBLE_GAIN ? `, with its ups and downs ${gain > 1 ? 'enlarged' : 'reduced'} by ${(100 * Math.abs(gain - 1)).toFixed(0)} %` : ''}`;
}

function usable(line: LevelLine): LevelLine | null {
	const { gain, meanReference, meanWearable } = line;
	const bias = Math.abs(meanWearable - meanReference);
	if (!(gain < GAIN_LIMIT && gain > 1 / GAIN_LIMIT && bias < BIAS_LIMIT_BPM)) return null;
	return bias < NEGLIGIBLE_BIAS_BPM ? null : line;
}

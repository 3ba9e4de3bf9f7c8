/** Both recordings on the wearable's own seconds, with what a sound wearable would be expected to show. */
import type { Trace } from '../../formats/recording';
import { secondGrid, type SecondGrid } from '../second-grid';
import type { ClockMapping } from './proposal';
import { moved, responseLike, type Smoother } from './response-like';
import { unsoundSeconds } from './sound-reference';

export const LOWEST_BPM = 30;
export const HIGHEST_BPM = 230;
/** Unsound seconds of the reference that a straight line bridges, s. */
const LONGEST_HOLE_S = 12;
/** The wearable may stand anywhere within what the reference shows this many seconds around, s. */
const ENVELOPE_HALF_S = 6;

export interface CommonSeconds {
	/** Own clock of the wearable, whole epoch seconds. */
	startS: number;
	length: number;
	/** Readings of the wearable, bridged over at most 10 s; NaN elsewhere. */
	wearable: Float64Array;
	/** Sound reference, smoothed and delayed as the wearable is; NaN where there is none. */
	expected: Float64Array;
	/** Sound reference without smoothing, delayed so that `smoother` makes the expected readings of it. */
	source: Float64Array;
	smoother: Smoother;
	/** 1 at seconds that hold a reading; the others are bridged. */
	read: Uint8Array;
	/** How far the wearable stands outside of what the expected value passes through around; 0 inside, NaN unknown. */
	excess: Float64Array;
	toReferenceS: (wearableS: number) => number;
	toWearableS: (referenceS: number) => number;
	/** The reference on its own seconds, with what is unsound in it. */
	strap: SecondGrid & { unsound: Uint8Array };
}

export function clockMaps(wearable: Pick<Trace, 'tS'>, { offsetS, driftPpm }: ClockMapping): Pick<CommonSeconds, 'toReferenceS' | 'toWearableS'> {
	const firstS = wearable.tS[0] ?? 0;
	const drift = driftPpm * 1e-6;
	return {
		toReferenceS: (s) => s + offsetS + drift * (s - firstS),
		toWearableS: (s) => firstS + (s - offsetS - firstS) / (1 + drift)
	};
}

export function commonSeconds(reference: Pick<Trace, 'tS' | 'value'>, wearable: Pick<Trace, 'tS' | 'value'>, mapping: ClockMapping): CommonSeconds {
	const strap = heartRateSeconds(reference);
	const device = heartRateSeconds(wearable);
	const unsound = unsoundSeconds(strap.value);
	const sound = strap.value.slice();
	for (let i = 0; i < sound.length; i++) if (unsound[i]) sound[i] = NaN;
	const maps = clockMaps(wearable, mapping);
	const onWearable = (column: Float64Array) => resampled(column, strap.startS, device, maps.toReferenceS);
	const filled = bridged(sound, LONGEST_HOLE_S);
	const { column: shown, smoother, lagS } = responseLike(filled, device.value, onWearable);
	const read = new Uint8Array(device.value.length);
	for (let i = 0; i < wearable.tS.length; i++) {
		const second = Math.round(wearable.tS[i]) - device.startS;
		if (second >= 0 && second < read.length && wearable.value[i] > LOWEST_BPM && wearable.value[i] < HIGHEST_BPM) read[second] = 1;
	}
	return {
		startS: device.startS,
		length: device.value.length,
		wearable: device.value,
		expected: shown,
		source: moved(onWearable(filled), lagS),
		smoother,
		read,
		excess: outsideOf(device.value, shown, ENVELOPE_HALF_S),
		...maps,
		strap: { ...strap, unsound }
	};
}

const heartRateSeconds = (trace: Pick<Trace, 'tS' | 'value'>): SecondGrid => secondGrid(trace, LOWEST_BPM + 1e-9, HIGHEST_BPM - 1e-9);

/** A column that starts at `startS` on the reference's clock, at the wearable's seconds; linear, NaN beside NaN. */
export function resampled(column: Float64Array, startS: number, device: Pick<SecondGrid, 'startS' | 'value'>, toReferenceS: (s: number) => number): Float64Array {
	const out = new Float64Array(device.value.length).fill(NaN);
	const first = toReferenceS(device.startS) - startS;
	const step = device.value.length > 1 ? (toReferenceS(device.startS + device.value.length - 1) - startS - first) / (device.value.length - 1) : 1;
	for (let i = 0; i < out.length; i++) {
		const x = first + step * i;
		const k = Math.floor(x);
		if (k < 0 || k >= column.length) continue;
		out[i] = k + 1 < column.length ? column[k] + (column[k + 1] - column[k]) * (x - k) : x === k ? column[k] : NaN;
	}
	return out;
}

/** Straight lines over holes of at most `longest` seconds. */
export function bridged(value: Float64Array, longest: number): Float64Array {
	const out = value.slice();
	let last = -1;
	for (let i = 0; i < value.length; i++) {
		if (Number.isNaN(value[i])) continue;
		if (last >= 0 && i - last > 1 && i - last - 1 <= longest) for (let j = last + 1; j < i; j++) out[j] = value[last] + ((value[i] - value[last]) * (j - last)) / (i - last);
		last = i;
	}
	return out;
}

/** Signed distance of a value outside of the lowest and highest expected value within ±half s. */
function outsideOf(value: Float64Array, expected: Float64Array, half: number): Float64Array {
	const out = new Float64Array(value.length).fill(NaN);
	for (let i = 0; i < value.length; i++) {
		const v = value[i];
		if (v !== v || Number.isNaN(expected[i])) continue;
		let low = Infinity;
		let high = -Infinity;
		const to = Math.min(value.length, i + half + 1);
		for (let j = Math.max(0, i - half); j < to; j++) {
			const e = expected[j];
			if (e < low) low = e;
			if (e > high) high = e;
		}
		out[i] = v > high ? v - high : v < low ? v - low : 0;
	}
	return out;
}

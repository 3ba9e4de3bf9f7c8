/** Wearable minus reference along the wearable's own readings, for drawing and for the value at the cursor. */
import { valueAt, type LineSamples } from './line-path';
import type { ClockPlace } from './bench-track';

/**
 * @param wearable readings on the wearable's own clock
 * @param reference readings on the reference's clock
 * @param place where the wearable's clock stands on the reference's
 * @param firstS first sample of the wearable's recording, own clock
 * @returns differences in bpm at the wearable's stamps (own clock); NaN where the reference has no value
 */
export function differenceLine(wearable: LineSamples, reference: LineSamples, place: ClockPlace, firstS: number): LineSamples {
	const n = wearable.tS.length;
	const value = new Float64Array(n).fill(NaN);
	const { tS, value: bpm, gapS } = reference;
	const drift = place.driftPpm * 1e-6;
	let after = 0;
	for (let i = 0; i < n; i++) {
		const own = wearable.tS[i];
		const axisS = own + place.offsetS + drift * (own - firstS);
		while (after < tS.length && tS[after] < axisS) after++;
		if (after < tS.length && tS[after] === axisS) value[i] = wearable.value[i] - bpm[after];
		else if (after > 0 && after < tS.length && tS[after] - tS[after - 1] <= gapS) {
			const between = bpm[after - 1] + ((bpm[after] - bpm[after - 1]) * (axisS - tS[after - 1])) / (tS[after] - tS[after - 1]);
			value[i] = wearable.value[i] - between;
		}
	}
	return { tS: wearable.tS, value, gapS: wearable.gapS };
}

export interface CursorValue {
	bpm: number | null;
	/** Wearable minus reference; null for the reference, or where either has no value. */
	differenceBpm: number | null;
}

/** Values of one wearable (or of the reference) at a moment of the axis. */
export function valueAtCursor(
	axisS: number,
	track: { heartRate: LineSamples; firstS: number },
	place: ClockPlace,
	reference: LineSamples | null
): CursorValue {
	const ownS = track.firstS + (axisS - place.offsetS - track.firstS) / (1 + place.driftPpm * 1e-6);
	const bpm = valueAt(track.heartRate, ownS);
	const referenceBpm = reference ? valueAt(reference, axisS) : null;
	return { bpm, differenceBpm: bpm === null || referenceBpm === null ? null : bpm - referenceBpm };
}

/** The value of a trace at times that are not its own, by the plan's pairing rule. */
import type { PairingRule } from './plan';

/** Stamps closer than this are the same time: epoch seconds in double precision resolve a quarter of a microsecond. */
export const TIME_TOLERANCE_S = 1e-6;

export interface Sampled {
	/** NaN where the rule gives no value. */
	value: Float64Array;
	/** Readings that the value is made of; the same index twice for one reading, −1 for none. */
	low: Int32Array;
	high: Int32Array;
}

/**
 * Read a trace at given times. Never extrapolates.
 *
 * @param tS stamps of the readings, strictly increasing, s
 * @param value readings, same length
 * @param queryS times asked for, increasing, s
 * @param rule interpolation between readings at most `maxGapS` apart, or the nearest reading within `toleranceS`; of
 *   two equally near ones, the earlier
 * @param holdLimitS where the rule gives nothing: the last reading, up to this long after its stamp, s; 0 = never
 * @returns values and the readings they rest on, one entry a query
 */
export function sampleTrace(
	tS: Float64Array,
	value: Float64Array,
	queryS: Float64Array,
	rule: PairingRule,
	holdLimitS: number
): Sampled {
	const n = queryS.length;
	const sampled: Sampled = {
		value: new Float64Array(n).fill(NaN),
		low: new Int32Array(n).fill(-1),
		high: new Int32Array(n).fill(-1)
	};
	const put = (i: number, reading: number, low: number, high: number) => {
		sampled.value[i] = reading;
		sampled.low[i] = low;
		sampled.high[i] = high;
	};
	let before = -1;
	for (let i = 0; i < n; i++) {
		const q = queryS[i];
		while (before + 1 < tS.length && tS[before + 1] <= q + TIME_TOLERANCE_S) before++;
		const after = before + 1;
		const sinceS = before >= 0 ? q - tS[before] : Infinity;
		const untilS = after < tS.length ? tS[after] - q : Infinity;
		if (sinceS <= TIME_TOLERANCE_S) put(i, value[before], before, before);
		else if (rule.method === 'nearest') {
			const nearest = sinceS <= untilS ? before : after;
			if (Math.min(sinceS, untilS) <= rule.toleranceS + TIME_TOLERANCE_S) put(i, value[nearest], nearest, nearest);
			else if (holdLimitS > 0 && sinceS <= holdLimitS + TIME_TOLERANCE_S) put(i, value[before], before, before);
		} else if (sinceS + untilS <= rule.maxGapS + TIME_TOLERANCE_S) {
			put(i, value[before] + ((value[after] - value[before]) * sinceS) / (sinceS + untilS), before, after);
		} else if (holdLimitS > 0 && sinceS <= holdLimitS + TIME_TOLERANCE_S) put(i, value[before], before, before);
	}
	return sampled;
}

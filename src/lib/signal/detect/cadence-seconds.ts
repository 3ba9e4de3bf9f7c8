/** Cadence on the wearable's seconds, as a band that a locked wearable would stand in. */
import type { Trace } from '../../formats/recording';
import { secondGrid } from '../second-grid';

export interface CadenceBand {
	/** Lowest and highest cadence of the last seconds, 1/min; NaN where none was recorded. */
	low: Float64Array;
	high: Float64Array;
}

/** A lock follows within this many seconds. */
const BACK_S = 12;
const LOWEST_PER_MIN = 10;
const HIGHEST_PER_MIN = 260;

/** @param toCadenceS from the wearable's clock to that of the cadence */
export function cadenceBand(cadence: Pick<Trace, 'tS' | 'value'>, startS: number, length: number, toCadenceS: (s: number) => number): CadenceBand {
	const grid = secondGrid(cadence, LOWEST_PER_MIN, HIGHEST_PER_MIN);
	const column = new Float64Array(length).fill(NaN);
	for (let i = 0; i < length; i++) {
		const k = Math.round(toCadenceS(startS + i)) - grid.startS;
		if (k >= 0 && k < grid.value.length) column[i] = grid.value[k];
	}
	const low = new Float64Array(length).fill(NaN);
	const high = new Float64Array(length).fill(NaN);
	for (let i = 0; i < length; i++) {
		let lowest = Infinity;
		let highest = -Infinity;
		for (let j = Math.max(0, i - BACK_S); j <= i; j++) {
			if (column[j] < lowest) lowest = column[j];
			if (column[j] > highest) highest = column[j];
		}
		if (highest >= lowest) {
			low[i] = lowest;
			high[i] = highest;
		}
	}
	return { low, high };
}

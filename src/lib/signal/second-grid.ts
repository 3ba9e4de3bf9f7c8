/** A trace on whole seconds of its own clock, gaps left empty, wild points taken out. */
import type { Trace } from '../formats/recording';

export interface SecondGrid {
	/** Time of the first grid point, whole epoch seconds on the trace's own clock. */
	startS: number;
	/** One value a second; NaN where there is none. */
	value: Float64Array;
	/** How many have a value. */
	valid: number;
}

/** Longest step between readings that is bridged by a straight line, s. */
export const BRIDGED_GAP_S = 10;
const LOWEST_BPM = 30;
const HIGHEST_BPM = 230;
/** A point further than this from the running median of ±7 s is taken for wild, bpm. */
const WILD_BPM = 15;
const MEDIAN_HALF_S = 7;
/** Longest grid, s: beyond four days a file holds a wrong date, not a session. */
const LONGEST_S = 4 * 86_400;

/**
 * Puts readings on whole seconds, linear between readings at most 10 s apart, empty elsewhere.
 * @param trace strictly increasing times; readings out of [low, high] are ignored
 */
export function secondGrid(trace: Pick<Trace, 'tS' | 'value'>, low = -Infinity, high = Infinity): SecondGrid {
	const { tS, value } = trace;
	const keep: number[] = [];
	for (let i = 0; i < tS.length; i++) if (value[i] >= low && value[i] <= high) keep.push(i);
	if (keep.length === 0) return { startS: 0, value: new Float64Array(0), valid: 0 };
	const startS = Math.ceil(tS[keep[0]] - 1e-6);
	const endS = Math.min(startS + LONGEST_S, Math.floor(tS[keep[keep.length - 1]] + 1e-6));
	const grid = new Float64Array(Math.max(1, endS - startS + 1)).fill(NaN);
	let valid = 0;
	const put = (second: number, v: number) => {
		const i = second - startS;
		if (i < 0 || i >= grid.length) return;
		if (Number.isNaN(grid[i])) valid++;
		grid[i] = v;
	};
	for (let k = 0; k + 1 < keep.length; k++) {
		const [a, b] = [keep[k], keep[k + 1]];
		const gap = tS[b] - tS[a];
		if (gap > BRIDGED_GAP_S) {
			put(Math.round(tS[a]), value[a]);
			continue;
		}
		for (let s = Math.ceil(tS[a] - 1e-6); s <= tS[b] + 1e-6; s++) put(s, value[a] + (value[b] - value[a]) * Math.min(1, Math.max(0, (s - tS[a]) / gap)));
	}
	const last = keep[keep.length - 1];
	put(Math.round(tS[last]), value[last]);
	return { startS, value: grid, valid };
}

/** Heart rate on whole seconds, without values that no heart has and without wild points. */
export function heartRateGrid(trace: Pick<Trace, 'tS' | 'value'>): SecondGrid {
	const grid = secondGrid(trace, LOWEST_BPM + 1e-9, HIGHEST_BPM - 1e-9);
	const clean = withoutWildPoints(grid.value);
	let valid = 0;
	for (let i = 0; i < clean.length; i++) if (!Number.isNaN(clean[i])) valid++;
	return { startS: grid.startS, value: clean, valid };
}

/**
 * Empties points more than 15 bpm from the median of the 15 s around them. The window shrinks on both sides alike at
 * the ends: a one-sided window would take a normal fast rise at the start for a wild point.
 */
export function withoutWildPoints(value: Float64Array): Float64Array {
	const out = value.slice();
	const spans = blockSpans(value);
	for (let i = 0; i < value.length; i++) {
		// Where three blocks in a row lie close together no window within them can hold a wild point.
		const block = Math.floor(i / MEDIAN_HALF_S);
		if (spans.high[block] - spans.low[block] <= WILD_BPM) {
			i = (block + 1) * MEDIAN_HALF_S - 1;
			continue;
		}
		const v = value[i];
		if (v !== v) continue;
		const half = Math.min(MEDIAN_HALF_S, i, value.length - 1 - i);
		const high = v + WILD_BPM;
		const low = v - WILD_BPM;
		// The median is out of reach when more than half of the window stands beyond it on one side: no sorting needed.
		let count = 0;
		let above = 0;
		let below = 0;
		for (let j = i - half; j <= i + half; j++) {
			const other = value[j];
			if (other !== other) continue;
			count++;
			if (other > high) above++;
			else if (other < low) below++;
		}
		if (count >= 3 && (2 * above > count || 2 * below > count)) out[i] = NaN;
	}
	return out;
}

/** Lowest and highest value of every block of 7 s and its two neighbours; ±Infinity where there is none. */
function blockSpans(value: Float64Array): { low: Float64Array; high: Float64Array } {
	const blocks = Math.ceil(value.length / MEDIAN_HALF_S);
	const low = new Float64Array(blocks).fill(Infinity);
	const high = new Float64Array(blocks).fill(-Infinity);
	for (let block = 0; block < blocks; block++) {
		const to = Math.min(value.length, (block + 2) * MEDIAN_HALF_S);
		for (let i = Math.max(0, (block - 1) * MEDIAN_HALF_S); i < to; i++) {
			if (value[i] < low[block]) low[block] = value[i];
			if (value[i] > high[block]) high[block] = value[i];
		}
	}
	return { low, high };
}

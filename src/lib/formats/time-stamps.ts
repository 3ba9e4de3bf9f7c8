/** The order of time stamps in a file and what is odd about it. Nothing is repaired here; `assemble.ts` says what follows. */
import type { ReadingWarning, ReadOptions } from './recording';
import type { SampleTable } from './sample-table';
import { counted, spanText, timeText } from './time-text';

/** A gap is told from this length on. Common practice, no source. */
const GAP_S = 10;
const JUMP_S = 43_200;
const YEAR_1990_S = 631_152_000;
const YEAR_2100_S = 4_102_444_800;

/**
 * Rows by time, those without a time left out.
 *
 * @param tS time stamps in file order, NaN = none
 * @returns `rows`: row indices, stable among equal times; `tS`: the distinct times, increasing
 */
export function mergeOrder(tS: Float64Array): { rows: Uint32Array; tS: Float64Array } {
	const rows = new Uint32Array(tS.length);
	let n = 0;
	let sorted = true;
	let last = -Infinity;
	for (let i = 0; i < tS.length; i++) {
		if (tS[i] !== tS[i]) continue;
		if (tS[i] < last) sorted = false;
		last = tS[i];
		rows[n++] = i;
	}
	const used = rows.slice(0, n);
	if (!sorted) used.sort((a, b) => tS[a] - tS[b] || a - b);
	const distinct = new Float64Array(n);
	let m = 0;
	for (let i = 0; i < n; i++) if (m === 0 || tS[used[i]] !== distinct[m - 1]) distinct[m++] = tS[used[i]];
	return { rows: used, tS: distinct.slice(0, m) };
}

/** Warnings about order, repeats, gaps and dates of the rows. */
export function timestampWarnings(
	table: SampleTable,
	found: { rowWord: string; withoutDate?: boolean },
	options: ReadOptions
): ReadingWarning[] {
	const warnings: ReadingWarning[] = [];
	let backward = 0;
	let backwardAt = NaN;
	let furthest = 0;
	let without = 0;
	let last = NaN;
	for (let row = 0; row < table.n; row++) {
		const t = table.tS[row];
		if (t !== t) {
			without++;
			continue;
		}
		if (t < last) {
			if (backward++ === 0) backwardAt = t;
			furthest = Math.max(furthest, last - t);
		}
		last = t;
	}
	const { rows, tS } = mergeOrder(table.tS.subarray(0, table.n));
	if (without > 0)
		warnings.push({
			code: 'no-time-stamp',
			message: `${counted(without, found.rowWord)} carry no time stamp and are left out.`
		});
	if (backward > 0)
		warnings.push({
			code: 'backward-step',
			message: `The clock steps back ${backward === 1 ? 'once' : `${backward} times`} from one ${found.rowWord} to the next, first to ${timeText(backwardAt)}, by up to ${spanText(furthest)}. The ${found.rowWord}s are put in order of time; no time is changed.`,
			at: { tS: backwardAt }
		});
	if (rows.length > tS.length) {
		let at = NaN;
		for (let i = 1; i < rows.length; i++)
			if (table.tS[rows[i]] === table.tS[rows[i - 1]]) {
				at = table.tS[rows[i]];
				break;
			}
		warnings.push({
			code: 'duplicate-time',
			message: `${counted(rows.length - tS.length, found.rowWord)} share a time stamp with another, first at ${timeText(at)}. They are merged: of each channel the first value stays.`,
			at: { tS: at }
		});
	}
	warnings.push(...gapWarnings(tS));
	if (!found.withoutDate && tS.length > 0) {
		const latest = options.nowS === undefined ? YEAR_2100_S : options.nowS + 86_400;
		const odd = tS[0] < YEAR_1990_S ? tS[0] : tS[tS.length - 1] > latest ? tS[tS.length - 1] : NaN;
		if (odd === odd)
			warnings.push({
				code: 'implausible-date',
				message: `The time stamps reach ${timeText(odd)}. The device's clock was not set; the times are kept as the file has them.`,
				at: { tS: odd }
			});
	}
	return warnings;
}

function gapWarnings(tS: Float64Array): ReadingWarning[] {
	let gaps = 0;
	let longest = 0;
	let longestAt = NaN;
	let jumps = 0;
	for (let i = 1; i < tS.length; i++) {
		const step = tS[i] - tS[i - 1];
		if (step <= GAP_S) continue;
		gaps++;
		if (step > JUMP_S) jumps++;
		if (step > longest) {
			longest = step;
			longestAt = tS[i - 1];
		}
	}
	if (gaps === 0) return [];
	const warnings: ReadingWarning[] = [
		{
			code: 'gap',
			message: `${counted(gaps, 'gap')} of more than ${GAP_S} s. The longest is ${Number(longest.toFixed(1))} s${longest < 120 ? '' : ` (${spanText(longest)})`}, after ${timeText(longestAt)}.`,
			at: { tS: longestAt }
		}
	];
	if (jumps > 0)
		warnings.push({
			code: 'clock-jump',
			message: `The clock jumps by ${spanText(longest)} after ${timeText(longestAt)}. Either the device's clock was set on the way or two activities stand in one file. The times are kept as the file has them.`,
			at: { tS: longestAt }
		});
	return warnings;
}

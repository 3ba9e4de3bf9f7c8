/** Which values count as readings, and what is odd about the heart rate of the rows. */
import type { ChannelKind, ReadingWarning } from './recording';
import type { SampleTable } from './sample-table';
import { mergeOrder } from './time-stamps';
import { counted, timeText } from './time-text';

const HIGHEST_BPM = 400;

interface RowsFound {
	/** How the format calls a row. */
	rowWord: string;
	/** False for tables with one row per channel. */
	rowsHoldAllChannels?: boolean;
}

/** True for a value that is kept in a trace of this kind. */
export function isReading(kind: ChannelKind, value: number): boolean {
	switch (kind) {
		case 'heartRate':
			return value > 0 && value !== 255 && value <= HIGHEST_BPM;
		case 'rrInterval':
			return value > 0 && value < Infinity;
		case 'cadence':
		case 'speed':
		case 'power':
		case 'distance':
			return value >= 0 && value < Infinity;
		default:
			return Number.isFinite(value);
	}
}

/** What the heart-rate column holds besides sound values, one sentence for each kind of oddity. */
export function heartRateWarnings(table: SampleTable, column: Float64Array, found: RowsFound): ReadingWarning[] {
	const counts = { zero: 0, empty255: 0, impossible: 0, low: 0, high: 0, valid: 0 };
	const first: Partial<Record<keyof typeof counts, number>> = {};
	let lowest = Infinity;
	let highest = -Infinity;
	const count = (what: keyof typeof counts, row: number) => {
		counts[what]++;
		first[what] ??= table.tS[row];
	};
	for (let row = 0; row < table.n; row++) {
		const v = column[row];
		if (v !== v) continue;
		if (v === 0) count('zero', row);
		else if (v === 255) count('empty255', row);
		else if (v < 0 || v > HIGHEST_BPM) count('impossible', row);
		else {
			count('valid', row);
			if (v < 30) count('low', row);
			if (v > 220) count('high', row);
			if (v < lowest) lowest = v;
			if (v > highest) highest = v;
		}
	}
	const warnings: ReadingWarning[] = [];
	const tell = (what: keyof typeof counts, code: string, message: string) => {
		if (counts[what] > 0) warnings.push({ code, message, at: { tS: first[what] } });
	};
	const readings = (n: number) => counted(n, 'heart-rate value');
	tell(
		'zero',
		'heart-rate-zero',
		`${readings(counts.zero)} of 0, first at ${timeText(first.zero ?? NaN)}: no reading, left out.`
	);
	tell(
		'empty255',
		'heart-rate-255',
		`${readings(counts.empty255)} of 255, first at ${timeText(first.empty255 ?? NaN)}: the mark for 'empty' written as a number, left out.`
	);
	tell(
		'impossible',
		'heart-rate-impossible',
		`${readings(counts.impossible)} below 0 or above ${HIGHEST_BPM}, first at ${timeText(first.impossible ?? NaN)}: left out.`
	);
	tell(
		'low',
		'implausible-heart-rate',
		`${readings(counts.low)} below 30 bpm (lowest ${lowest}), first at ${timeText(first.low ?? NaN)}: kept as the file has them.`
	);
	tell(
		'high',
		'implausible-heart-rate',
		`${readings(counts.high)} above 220 bpm (highest ${highest}), first at ${timeText(first.high ?? NaN)}: kept as the file has them.`
	);
	if (counts.valid > 0 && found.rowsHoldAllChannels !== false) warnings.push(...missingHeartRate(table, column, found));
	return warnings;
}

/** Distinct time stamps at which no row has a heart rate. */
function missingHeartRate(table: SampleTable, column: Float64Array, found: RowsFound): ReadingWarning[] {
	const order = mergeOrder(table.tS.subarray(0, table.n));
	let missing = 0;
	let run = 0;
	let longest = 0;
	let longestFrom = NaN;
	let runFrom = NaN;
	let k = 0;
	for (let i = 0; i < order.tS.length; i++) {
		let has = false;
		for (; k < order.rows.length && table.tS[order.rows[k]] === order.tS[i]; k++)
			if (isReading('heartRate', column[order.rows[k]])) has = true;
		if (has) {
			run = 0;
			continue;
		}
		missing++;
		if (run++ === 0) runFrom = order.tS[i];
		if (run > longest) {
			longest = run;
			longestFrom = runFrom;
		}
	}
	if (missing === 0) return [];
	return [
		{
			code: 'heart-rate-missing',
			message: `${missing} of ${counted(order.tS.length, 'time stamp')} carry no heart rate. The longest run is ${counted(longest, found.rowWord)}, from ${timeText(longestFrom)}.`,
			at: { tS: longestFrom }
		}
	];
}

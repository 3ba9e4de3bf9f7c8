/** Heart rate from beats: those that a strap stored, and those that stand as intervals. */
import type { IntervalList } from './beats';
import { heartRateFromRr } from './heart-rate-from-rr';
import type { ReadingWarning, Trace } from './recording';
import type { SampleTable } from './sample-table';
import { mergeOrder } from './time-stamps';
import { counted, spanText, timeText } from './time-text';

/** Stored beats fill the times where the rows have no heart rate within 5 s. */
export function withStoredBeats(
	rows: Trace | undefined,
	stored: { tS: number[]; bpm: number[] } | undefined,
	table: SampleTable,
	warnings: ReadingWarning[]
): Trace | undefined {
	if (!stored || stored.tS.length === 0) return rows;
	const tS: number[] = [];
	const value: number[] = [];
	let k = 0;
	let used = 0;
	let min = rows?.inFile?.min ?? Infinity;
	let max = rows?.inFile?.max ?? -Infinity;
	const rowLength = rows?.tS.length ?? 0;
	for (let i = 0; i < stored.tS.length; i++) {
		const t = stored.tS[i];
		while (rows && k < rowLength && rows.tS[k] <= t) {
			tS.push(rows.tS[k]);
			value.push(rows.value[k++]);
		}
		if (rows && ((k > 0 && t - rows.tS[k - 1] <= 5) || (k < rowLength && rows.tS[k] - t <= 5))) continue;
		if (tS.length > 0 && t <= tS[tS.length - 1]) continue;
		tS.push(t);
		value.push(stored.bpm[i]);
		min = Math.min(min, stored.bpm[i]);
		max = Math.max(max, stored.bpm[i]);
		used++;
	}
	for (; rows && k < rowLength; k++) {
		tS.push(rows.tS[k]);
		value.push(rows.value[k]);
	}
	warnings.push({
		code: 'stored-beats',
		message:
			`The file holds ${counted(stored.tS.length, 'beat')} that a strap stored and handed over later, from ${timeText(stored.tS[0])} to ${timeText(stored.tS[stored.tS.length - 1])}. ` +
			(rows
				? `${used} of them give the heart rate where the records have none.`
				: 'The heart rate comes from them; the records have none.') +
			(table.n > 0 && stored.tS[0] < firstOf(table) - 5
				? ` They begin ${spanText(firstOf(table) - stored.tS[0])} before the first record.`
				: ''),
		at: { tS: stored.tS[0] }
	});
	return {
		kind: 'heartRate',
		tS: Float64Array.from(tS),
		value: Float64Array.from(value),
		inFile: { n: (rows?.inFile?.n ?? 0) + used, min, max }
	};
}

function firstOf(table: SampleTable): number {
	return mergeOrder(table.tS.subarray(0, table.n)).tS[0];
}

export function intervalWarnings(intervals: IntervalList): ReadingWarning[] {
	const warnings: ReadingWarning[] = [];
	let odd = 0;
	for (const rr of intervals.rrMs) if (rr < 240 || rr > 2500) odd++;
	if (odd > 0)
		warnings.push({
			code: 'implausible-rr',
			message: `${counted(odd, 'interval')} shorter than 240 ms or longer than 2500 ms (${Math.round(intervals.inFile.min)} to ${Math.round(intervals.inFile.max)} ms): lost or extra beats, kept as the file has them.`
		});
	if (intervals.sampled)
		warnings.push({
			code: 'rr-sampled',
			message:
				'The intervals do not add up to the time they span: they were sampled at a fixed rate and are no list of beats. Each stands at the time of its record.'
		});
	if (intervals.overlapping > 0)
		warnings.push({
			code: 'rr-overlap',
			message: `${counted(intervals.overlapping, 'interval')} would begin before the one before and ${intervals.overlapping === 1 ? 'is' : 'are'} left out.`
		});
	return warnings;
}

export function heartRateOfIntervals(
	intervals: Trace | undefined,
	sampled: boolean,
	warnings: ReadingWarning[]
): Trace | null {
	if (!intervals) return null;
	if (sampled) {
		const keep = [...intervals.value.keys()].filter((i) => intervals.value[i] >= 240 && intervals.value[i] <= 2500);
		if (keep.length === 0) return null;
		warnings.push({
			code: 'hr-from-rr',
			message: `The file has no heart rate of its own. It is 60 s divided by each of ${counted(keep.length, 'sampled interval')}.`
		});
		return countedTrace(
			keep.map((i) => intervals.tS[i]),
			keep.map((i) => 60000 / intervals.value[i])
		);
	}
	const derived = heartRateFromRr(intervals.tS, intervals.value);
	if (derived.tS.length === 0) return null;
	warnings.push({
		code: 'hr-from-rr',
		message: `The file has no heart rate of its own. It is computed once a second from ${counted(intervals.tS.length, 'interval')} in a centred window of 4 s. ${counted(derived.dropped, 'early, extra or missed beat')} left out.`
	});
	return countedTrace(derived.tS, derived.bpm);
}

function countedTrace(tS: number[], bpm: number[]): Trace {
	let min = Infinity;
	let max = -Infinity;
	for (const v of bpm) {
		if (v < min) min = v;
		if (v > max) max = v;
	}
	return {
		kind: 'heartRate',
		tS: Float64Array.from(tS),
		value: Float64Array.from(bpm),
		inFile: { n: bpm.length, min, max }
	};
}

/**
 * From the rows of a file to a recording, the same for every format.
 *
 * What happens to time stamps, and how it is told:
 * - rows out of order are put in order (`backward-step`); times themselves are never changed
 * - rows that share a time stamp are merged channel by channel, the first valid value of each standing
 *   (`duplicate-time`); `inFile` of each trace still counts every valid value, which is what an independent reader
 *   of the file would count
 * - gaps of more than 10 s stay gaps (`gap`, once, with their number and the longest); of more than 12 h they are
 *   told as a jump of the clock too (`clock-jump`)
 * - dates before 1990, after 2100 or in the future are kept (`implausible-date`)
 *
 * Heart rate: 0 and 255 (the empty value of one-byte fields, written as a number) are no reading
 * (`heart-rate-zero`, `heart-rate-255`); negative values and values above 400 are left out
 * (`heart-rate-impossible`); below 30 and above 220 they are kept and told (`implausible-heart-rate`).
 * A channel of cadence, speed, power or distance that is 0 from beginning to end is left out (`channel-all-zero`).
 */
import type { IntervalList } from './beats';
import { heartRateFromRr } from './heart-rate-from-rr';
import {
	CHANNEL_KINDS,
	type ChannelKind,
	type FileFormat,
	type HeartRateSource,
	type Reading,
	type ReadingWarning,
	type ReadOptions,
	type RecordedDevice,
	type Trace
} from './recording';
import type { SampleTable } from './sample-table';
import { timestampWarnings, mergeOrder } from './time-stamps';
import { counted, spanText, timeText } from './time-text';

/** What a format's reader found in a file. */
export interface FoundInFile {
	format: FileFormat;
	/** Name and version of the reader. */
	readerVersion: string;
	device: RecordedDevice;
	activity: string | null;
	/** Rows in file order, one column per channel kind. */
	table: SampleTable;
	/** How the format calls a row, for the sentences: `record`, `track point`, `row`. */
	rowWord: string;
	/** False for tables with one row per channel, where a row without heart rate is no loss. */
	rowsHoldAllChannels?: boolean;
	intervals?: IntervalList;
	/** Heart rate that stands apart from the rows; fills the times where the rows have none. */
	storedHeartRate?: { tS: number[]; bpm: number[] };
	/** True where the times count from an unknown start. */
	withoutDate?: boolean;
	heartRateSensors?: RecordedDevice[];
	heartRateSources?: HeartRateSource[];
	warnings: ReadingWarning[];
}

const HIGHEST_BPM = 400;
/** Channels in which a 0 may be a stop, but nothing else than 0 means that nothing was measured. */
const ALL_ZERO_MEANS_NONE: ReadonlySet<ChannelKind> = new Set(['cadence', 'speed', 'power', 'distance']);

/**
 * Puts rows and beats together to a recording.
 *
 * @param found what the reader of the format gave
 * @param options what the importer knows
 * @returns a recording, or a refusal where there are fewer than two heart-rate values
 */
export function assemble(found: FoundInFile, options: ReadOptions = {}): Reading {
	const { table } = found;
	const warnings = [...found.warnings];
	dropImpossibleTimes(table);
	warnings.push(...timestampWarnings(table, found, options));
	const order = mergeOrder(table.tS.subarray(0, table.n));
	const traces: Trace[] = [];
	const columnTraces = new Map<ChannelKind, Trace>();
	for (const kind of CHANNEL_KINDS) {
		if (kind === 'rrInterval' && found.intervals) continue;
		const column = table.column(kind);
		if (!column) continue;
		if (kind === 'heartRate') warnings.push(...heartRateWarnings(table, column, found));
		const trace = traceFromColumn(kind, table.tS, column, order);
		if (!trace) continue;
		if (trace.inFile?.n === 0 && ALL_ZERO_MEANS_NONE.has(kind)) {
			warnings.push({
				code: 'channel-all-zero',
				message: `The ${WORD[kind]} is 0 in all ${counted(trace.tS.length, 'value')} and is left out.`
			});
			continue;
		}
		columnTraces.set(kind, trace);
	}
	const heartRate = withStoredBeats(columnTraces.get('heartRate'), found, warnings);
	if (heartRate) columnTraces.set('heartRate', heartRate);
	if (found.intervals && found.intervals.tS.length > 0) {
		columnTraces.set('rrInterval', {
			kind: 'rrInterval',
			tS: found.intervals.tS,
			value: found.intervals.rrMs,
			inFile: found.intervals.inFile
		});
		warnings.push(...intervalWarnings(found.intervals));
	}
	if (!columnTraces.has('heartRate')) {
		const derived = heartRateOfIntervals(columnTraces.get('rrInterval'), found.intervals?.sampled ?? false, warnings);
		if (derived) columnTraces.set('heartRate', derived);
	}
	for (const kind of CHANNEL_KINDS) {
		const trace = columnTraces.get(kind);
		if (trace) traces.push(trace);
	}
	const refusal = heartRateRefusal(columnTraces.get('heartRate'), table, found, traces);
	if (refusal) return { ok: false, refusal, warnings };
	const { startS, endS } = spanOf(order.tS, traces);
	return {
		ok: true,
		recording: {
			format: found.format,
			readerVersion: found.readerVersion,
			device: found.device,
			activity: found.activity,
			startS,
			endS,
			traces,
			...(found.heartRateSensors?.length ? { heartRateSensors: found.heartRateSensors } : {}),
			...(found.heartRateSources && found.heartRateSources.length > 1
				? { heartRateSources: found.heartRateSources }
				: {}),
			warnings
		}
	};
}

/** No calendar reaches further, and no clock shows it: such a time stamp counts as none. */
const FURTHEST_S = 8.64e12;

function dropImpossibleTimes(table: SampleTable): void {
	for (let row = 0; row < table.n; row++) if (!(Math.abs(table.tS[row]) <= FURTHEST_S)) table.tS[row] = NaN;
}

/** Span of the rows; of the traces only where there are no rows (a list of intervals). */
function spanOf(rowTimes: Float64Array, traces: Trace[]): { startS: number; endS: number } {
	let startS = Infinity;
	let endS = -Infinity;
	for (const tS of rowTimes.length > 0 ? [rowTimes] : traces.map((trace) => trace.tS)) {
		startS = Math.min(startS, tS[0]);
		endS = Math.max(endS, tS[tS.length - 1]);
	}
	return { startS, endS };
}

const WORD: Record<ChannelKind, string> = {
	heartRate: 'heart rate',
	rrInterval: 'interval',
	cadence: 'cadence',
	speed: 'speed',
	power: 'power',
	altitude: 'altitude',
	distance: 'distance',
	temperature: 'temperature'
};

/** True for a value that is kept in a trace of this kind. */
function isReading(kind: ChannelKind, value: number): boolean {
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

function traceFromColumn(
	kind: ChannelKind,
	rowTimes: Float64Array,
	column: Float64Array,
	order: { rows: Uint32Array; tS: Float64Array }
): Trace | null {
	const zeroCounts = kind === 'altitude' || kind === 'temperature';
	const tS = new Float64Array(order.tS.length);
	const value = new Float64Array(order.tS.length);
	let length = 0;
	let n = 0;
	let min = Infinity;
	let max = -Infinity;
	for (const row of order.rows) {
		const v = column[row];
		if (!isReading(kind, v)) continue;
		if (v !== 0 || zeroCounts) {
			n++;
			if (v < min) min = v;
			if (v > max) max = v;
		}
		if (length > 0 && tS[length - 1] === rowTimes[row]) continue;
		tS[length] = rowTimes[row];
		value[length++] = v;
	}
	if (length === 0) return null;
	return { kind, tS: tS.slice(0, length), value: value.slice(0, length), inFile: { n, min, max } };
}

function heartRateWarnings(table: SampleTable, column: Float64Array, found: FoundInFile): ReadingWarning[] {
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
function missingHeartRate(table: SampleTable, column: Float64Array, found: FoundInFile): ReadingWarning[] {
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

/** Stored beats fill the times where the rows have no heart rate within 5 s. */
function withStoredBeats(rows: Trace | undefined, found: FoundInFile, warnings: ReadingWarning[]): Trace | undefined {
	const stored = found.storedHeartRate;
	if (!stored || stored.tS.length === 0) return rows;
	const tS: number[] = [];
	const value: number[] = [];
	let k = 0;
	let used = 0;
	const { table } = found;
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

function intervalWarnings(intervals: IntervalList): ReadingWarning[] {
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

function heartRateOfIntervals(
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

function heartRateRefusal(
	heartRate: Trace | undefined,
	table: SampleTable,
	found: FoundInFile,
	traces: Trace[]
): { code: string; message: string } | null {
	if (heartRate && heartRate.tS.length >= 2) return null;
	const name = found.format === 'rr-text' ? 'interval text' : found.format.toUpperCase();
	const others = traces
		.filter((trace) => trace.kind !== 'heartRate')
		.map((trace) => `${WORD[trace.kind]} (${trace.tS.length})`);
	const holds =
		`This ${name} file was read: ${counted(table.n, found.rowWord)}` +
		(others.length ? `, with ${others.join(', ')}` : '') +
		'.';
	if (heartRate)
		return {
			code: 'too-few-values',
			message: `${holds} It holds only one heart-rate value at one time. A recording needs at least two. Export the whole activity and try again.`
		};
	const column = table.column('heartRate');
	const zeros = column?.reduce((sum, v) => sum + (v === 0 ? 1 : 0), 0) ?? 0;
	const why = zeros
		? `Its heart rate is 0 in all ${counted(zeros, 'value')}: no sensor was read.`
		: 'None of them carries a heart rate.';
	return {
		code: 'no-heart-rate',
		message: `${holds} ${why} Choose the file of a device that recorded heart rate, or export it again with heart rate included.`
	};
}

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
import { heartRateWarnings, isReading } from './heart-rate-checks';
import { heartRateOfIntervals, intervalWarnings, withStoredBeats } from './heart-rate-of-beats';
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
import { counted } from './time-text';

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
	const heartRate = withStoredBeats(columnTraces.get('heartRate'), found.storedHeartRate, table, warnings);
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

/**
 * FIT files to recordings.
 *
 * What this reader does with the oddities that real files hold (those of the file's structure are listed in `walk.ts`,
 * those of time stamps and values in `../assemble.ts`):
 * - records without a time stamp take the time of the record before them; where no record has one, they are put one
 *   second apart from the moment the file was begun (`no-time-stamps`)
 * - position and heart rate in separate records of one time are merged
 * - beat intervals (`hrv`, `beat_intervals`) are put on the clock of the records between which they stand
 * - beats stored in the strap (`hr`) give intervals, and the heart rate where the records have none (`stored-beats`)
 * - a heart rate in a developer field is used where the plain field is empty (`developer-field`), otherwise offered
 *   as a second source (`second-heart-rate-source`)
 * - cadence on foot is doubled where it counts one foot, for each session by its own sport (`cadence-doubled`)
 * - a field whose size is no whole number of elements is left out, the rest of its message is read (`odd-field-size`)
 * - all-day recordings (`monitoring`) give their heart rate
 */
import { assemble } from '../assemble';
import { placeIntervals, type IntervalList } from '../beats';
import { isOnFoot, toSteps } from '../cadence';
import type { HeartRateSource, Reading, ReadingWarning, ReadOptions } from '../recording';
import type { SampleTable } from '../sample-table';
import { counted } from '../time-text';
import { collectFit, type Collected } from './collect';
import { heartRateSensors, writingDevice } from './device';
import { RECORD_FIELDS } from './record-fields';
import { sportName } from './sports';

export const FIT_READER_VERSION = 'fit 1';

/**
 * Reads a FIT file.
 *
 * @param bytes content of the file, beginning with a FIT header
 * @param options which heart-rate source to use, where there are several
 * @returns a recording with all that was odd, or a refusal; never throws on bad content
 */
export function readFit(bytes: Uint8Array, options: ReadOptions = {}): Reading {
	const collected = collectFit(bytes);
	const { table } = collected;
	const warnings = structureWarnings(collected);
	warnings.push(...placeRecordsWithoutTime(collected));
	const usesDeveloperField = options.heartRateSource?.startsWith('developer:') ? options.heartRateSource : null;
	const sources = heartRateSources(table);
	warnings.push(...useDeveloperFields(table, usesDeveloperField));
	addCadenceFraction(table);
	const { activity, cadenceWarnings } = activityAndCadence(collected);
	warnings.push(...cadenceWarnings);
	const { stored } = collected;
	const storedHeartRate = storedSeries(stored.tS, stored.bpm);
	if (stored.withoutClock > 0)
		warnings.push({
			code: 'stored-beats-without-clock',
			message: `${counted(stored.withoutClock, 'stored beat')} come before any time stamp and cannot be placed. They are left out.`
		});
	return assemble(
		{
			format: 'fit',
			readerVersion: FIT_READER_VERSION,
			device: writingDevice(collected.fileIds, collected.devices, collected.creatorSoftware),
			activity,
			table,
			rowWord: 'record',
			intervals: intervalsOf(collected),
			storedHeartRate,
			heartRateSensors: heartRateSensors(collected.devices),
			heartRateSources: sources,
			withoutDate: collected.relativeClock || warnings.some((warning) => warning.code === 'no-time-stamps'),
			warnings
		},
		options
	);
}

function structureWarnings(collected: Collected): ReadingWarning[] {
	const warnings = [...collected.report.warnings];
	if (collected.report.parts > 1)
		warnings.push({
			code: 'chained-parts',
			message: `The file is made of ${collected.report.parts} parts chained together. All are read as one recording.`
		});
	if (collected.sessions.length > 1)
		warnings.push({
			code: 'several-sessions',
			message: `The file holds ${collected.sessions.length} sessions (${collected.sessions.map((session) => sportName(session.sport)).join(', ')}). They are read as one recording.`
		});
	for (const number of collected.oddFields)
		warnings.push({
			code: 'odd-field-size',
			message: `The size of record field ${number} (${RECORD_FIELDS[number]?.column ?? 'developer field'}) is no whole number of values. The field is left out, the rest of the records is read.`
		});
	if (collected.relativeClock)
		warnings.push({
			code: 'no-clock',
			message:
				'The time stamps count from when the device was switched on: its clock was never set. Give the start time, or align by shape.'
		});
	return warnings;
}

function placeRecordsWithoutTime(collected: Collected): ReadingWarning[] {
	const { table, recordsWithoutTime } = collected;
	if (recordsWithoutTime === 0) return [];
	const stamped = table.tS.subarray(0, table.n).some((t) => t === t);
	if (stamped)
		return [
			{
				code: 'record-without-time',
				message: `${counted(recordsWithoutTime, 'record')} without a time stamp take the time of the record before.`
			}
		];
	const startS = collected.createdS === collected.createdS ? collected.createdS : 0;
	for (let row = 0; row < table.n; row++) table.tS[row] = startS + row;
	return [
		{
			code: 'no-time-stamps',
			message: `None of the ${counted(table.n, 'record')} carries a time stamp. They are put 1 s apart, in the order of the file, from ${
				startS ? 'the moment the file was begun' : 'an unknown start'
			}: check the spacing before the times are used.`
		}
	];
}

function heartRateSources(table: SampleTable): HeartRateSource[] {
	const sources: HeartRateSource[] = [];
	for (const name of ['heartRate', ...table.names().filter((column) => column.startsWith('developer:heartRate:'))]) {
		const values = table.column(name)?.filter((value) => value > 0);
		if (!values || values.length === 0) continue;
		sources.push({
			key: name === 'heartRate' ? 'record' : name,
			label: name === 'heartRate' ? 'heart rate of the records' : `developer field ${name.split(':')[2]}`,
			n: values.length,
			min: values.reduce((a, b) => Math.min(a, b)),
			max: values.reduce((a, b) => Math.max(a, b))
		});
	}
	return sources;
}

/** Developer columns take the place of a plain column that is absent, empty or all 0, or of the one that the importer chose. */
function useDeveloperFields(table: SampleTable, chosen: string | null): ReadingWarning[] {
	const warnings: ReadingWarning[] = [];
	for (const column of table.names().filter((name) => name.startsWith('developer:'))) {
		const [, kind, label] = column.split(':');
		if (column === chosen || (!table.holds(kind) && table.holds(column))) {
			table.rename(column, kind);
			warnings.push({
				code: 'developer-field',
				message: `The ${kind === 'heartRate' ? 'heart rate' : kind} comes from the developer field '${label}'.`
			});
		} else if (kind === 'heartRate' && table.holds(column)) {
			warnings.push({
				code: 'second-heart-rate-source',
				message: `The file holds a second heart rate, in the developer field '${label}'. The one of the records is used. Choose the other at import if it belongs to the device under test.`
			});
			table.drop(column);
		} else table.drop(column);
	}
	return warnings;
}

function addCadenceFraction(table: SampleTable): void {
	const fraction = table.column('cadenceFraction');
	const cadence = table.column('cadence');
	if (fraction && cadence)
		for (let row = 0; row < table.n; row++) if (fraction[row] === fraction[row]) cadence[row] += fraction[row];
	table.drop('cadenceFraction');
}

/** Sport of each stretch; cadence on foot is counted in steps. */
function activityAndCadence(collected: Collected): { activity: string | null; cadenceWarnings: ReadingWarning[] } {
	const { table, sessions, sports } = collected;
	const known = sessions.filter((session) => !Number.isNaN(session.sport));
	const names = known.length ? known.map((session) => session.sport) : sports.slice(0, 1);
	const distinct = [...new Set(names.map(sportName))];
	const activity = distinct.length === 0 ? null : distinct.length === 1 ? distinct[0] : 'multisport';
	const cadenceWarnings: ReadingWarning[] = [];
	for (const name of distinct.filter(isOnFoot)) {
		const spans = known.filter((session) => sportName(session.sport) === name);
		const rows: number[] = [];
		for (let row = 0; row < table.n; row++)
			if (distinct.length === 1 || spans.some((span) => table.tS[row] >= span.startS && table.tS[row] <= span.endS))
				rows.push(row);
		const warning = toSteps(table, rows, name);
		if (warning) cadenceWarnings.push(warning);
	}
	return { activity, cadenceWarnings };
}

function storedSeries(tS: number[], bpm: number[]): { tS: number[]; bpm: number[] } | undefined {
	const order = [...tS.keys()].filter((i) => bpm[i] > 0).sort((a, b) => tS[a] - tS[b]);
	return order.length ? { tS: order.map((i) => tS[i]), bpm: order.map((i) => bpm[i]) } : undefined;
}

function intervalsOf(collected: Collected): IntervalList | undefined {
	const anchored = [...collected.rrMs.keys()].filter((i) => collected.rrAnchorS[i] === collected.rrAnchorS[i]);
	if (anchored.length > 0)
		return placeIntervals(
			anchored.map((i) => collected.rrMs[i]),
			anchored.map((i) => collected.rrAnchorS[i])
		);
	const { stored } = collected;
	const order = [...stored.tS.keys()].filter((i) => stored.rrMs[i] > 0).sort((a, b) => stored.tS[a] - stored.tS[b]);
	if (order.length === 0) return undefined;
	const distinct = order.filter((i, k) => k === 0 || stored.tS[i] > stored.tS[order[k - 1]]);
	const rrMs = Float64Array.from(distinct, (i) => stored.rrMs[i]);
	return {
		tS: Float64Array.from(distinct, (i) => stored.tS[i]),
		rrMs,
		sampled: false,
		overlapping: 0,
		inFile: { n: rrMs.length, min: rrMs.reduce((a, b) => Math.min(a, b)), max: rrMs.reduce((a, b) => Math.max(a, b)) }
	};
}

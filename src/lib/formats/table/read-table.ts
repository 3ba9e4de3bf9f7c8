/**
 * Tables (CSV, TSV and relatives) to recordings, by a mapping.
 *
 * What this reader does with the oddities of real tables:
 * - times without a zone are read as UTC, or with the offset that the importer gives (`no-time-zone`)
 * - times of day without a date take the date from the lines above the table, or from the importer; otherwise they
 *   stand on 1 January 1970 (`no-date`), and past midnight they go on to the next day (`past-midnight`)
 * - elapsed seconds begin at the start given above the table or by the importer, otherwise at 0 (`no-clock`)
 * - rows without a readable time are left out (`row-without-time`); rows with more cells than the header are told
 *   (`ragged-rows`), because a decimal comma in a table parted by commas looks like that
 * - a program that saved `1.7186E9` for a time has lost the seconds: where hundreds of rows share a time for that reason,
 *   they are put one second apart from the first (`rounded-time-stamps`)
 * - where a comma parts the cells and is the decimal mark too, the parts are joined again (`decimal-comma`); rows in
 *   which that cannot be told are left out (`doubtful-rows`)
 * - several RR intervals may stand in one cell
 * - a long table may list its channels mixed or one after the other
 */
import { assemble, type FoundInFile } from '../assemble';
import { placeIntervals, stampedIntervals, type IntervalList } from '../beats';
import { isOnFoot, toSteps } from '../cadence';
import type { HeartRateSource, Reading, ReadingWarning, ReadOptions } from '../recording';
import { SampleTable } from '../sample-table';
import { counted } from '../time-text';
import { cellNumber, LineWalker, splitCells } from './cells';
import { activityOf, deviceOf, factsOf, startOf, type Facts } from './facts';
import { guessTableMapping, transpose } from './guess';
import { LongRows } from './long-rows';
import type { ChannelColumn, TableGuess, TableMapping } from './mapping';
import { joinRow } from './split-decimals';
import { parseDateTime, parseElapsedClock, parseTimeOfDay, secondsOfNumber } from './time-form';

export const TABLE_READER_VERSION = 'table 1';

/**
 * Reads a table with a guessed mapping.
 *
 * @param quoted decoded text of the file
 * @param options what the importer knows
 * @returns a recording, or a refusal that names the columns found
 */
export function readGuessedTable(quoted: string, options: ReadOptions = {}): Reading {
	const text = withoutLineQuotes(quoted);
	const guess = guessTableMapping(text);
	if (!guess.mapping) {
		const note = guess.notes.at(-1);
		const noTime = note?.code === 'no-time';
		return {
			ok: false,
			refusal: {
				code: noTime ? 'no-time' : 'no-heart-rate',
				message: `${note?.message ?? 'The table was not understood.'} ${noTime ? 'Add a column with the time of each row, or map the columns by hand.' : 'Name a column heart_rate, or map the columns by hand.'}`
			},
			warnings: []
		};
	}
	return readTable(text, chosenHeartRate(guess, options), options, guess);
}

/** Some programs put each whole line in quotes; the quotes are taken off where the first lines all look like that. */
function withoutLineQuotes(text: string): string {
	const first = text
		.slice(0, 20_000)
		.split('\n', 12)
		.slice(0, 10)
		.filter((line) => line.trim() !== '');
	const whole = first.length > 1 && first.every((line) => /^"[^"]*[,;\t][^"]*"$/.test(line.trim()));
	return whole ? text.replace(/^"([^"\n]*)"[ \t]*$/gm, '$1') : text;
}

/** The mapping with the heart-rate column that the importer chose. */
function chosenHeartRate(guess: TableGuess, options: ReadOptions): TableMapping {
	const mapping = guess.mapping as TableMapping;
	const chosen = guess.otherHeartRates.find((other) => other.name === options.heartRateSource);
	if (!chosen) return mapping;
	return {
		...mapping,
		channels: mapping.channels.map((entry) =>
			entry.kind === 'heartRate' ? { ...entry, column: chosen.column } : entry
		)
	};
}

/**
 * Reads a table with a given mapping.
 *
 * @param text decoded text of the file
 * @param mapping which column is what
 * @param options what the importer knows
 * @param guess what the guess found besides, for warnings
 * @returns a recording with all that was odd, or a refusal; never throws on bad content
 */
export function readTable(text: string, mapping: TableMapping, options: ReadOptions = {}, guess?: TableGuess): Reading {
	if (mapping.layout === 'transposed')
		return readTable(
			transpose(text, mapping.delimiter),
			{ ...mapping, layout: 'wide', delimiter: '\t' },
			options,
			guess
		);
	return new TableReader(text, mapping, options, guess).read();
}

class TableReader {
	private readonly table = new SampleTable();
	private readonly warnings: ReadingWarning[] = [];
	private readonly rrMs: number[] = [];
	private readonly rrS: number[] = [];
	/** Cells needed of each line. */
	private readonly width: number;
	private facts: Facts = new Map();
	/** Seconds to add to times that count from midnight or from the start. */
	private baseS = 0;
	private withoutZone = 0;
	private withoutTime = 0;
	private withoutTimeLine = 0;
	private ragged = 0;
	private raggedLine = 0;
	private doubtful = 0;
	private doubtfulLine = 0;
	private midnights = 0;
	private lastClockS = NaN;
	/** True once a time was written in exponent form. */
	private exponents = false;
	private readonly kinds: ChannelColumn[];

	constructor(
		private readonly text: string,
		private readonly mapping: TableMapping,
		private readonly options: ReadOptions,
		private readonly guess: TableGuess | undefined
	) {
		const { time, channels, long } = mapping;
		this.kinds = channels;
		this.width =
			2 +
			Math.max(
				time?.column ?? 0,
				time?.dateColumn ?? 0,
				long?.nameColumn ?? 0,
				long?.valueColumn ?? 0,
				guess?.columnNames.length ?? 0,
				...channels.map((entry) => entry.column)
			);
	}

	read(): Reading {
		const walker = new LineWalker(this.text);
		const above: string[] = [];
		while (walker.line < this.mapping.firstDataLine - 1) {
			const line = walker.next();
			if (line === null) break;
			if (walker.line !== this.mapping.headerLine && above.length < 200) above.push(line);
		}
		this.facts = factsOf(above, this.mapping.delimiter);
		const start = this.anchor();
		const width = this.guess?.columnNames.length ?? Infinity;
		const byTime = this.mapping.layout === 'long' ? new LongRows(this.table) : null;
		for (let line = walker.next(); line !== null; line = walker.next()) {
			if (line === '' || line.trim() === '') continue;
			const cells = this.cellsOf(line);
			if (cells === null) {
				if (this.doubtful++ === 0) this.doubtfulLine = walker.line;
				continue;
			}
			if (cells.length > width && cells.slice(width).some((cell) => cell !== '')) {
				if (this.ragged++ === 0) this.raggedLine = walker.line;
			}
			const tS = this.mapping.time ? this.timeOf(cells) : NaN;
			if (byTime) this.longRow(byTime, cells, tS, walker.line);
			else this.wideRow(cells, tS, walker.line);
		}
		if (byTime) this.warnings.push(...byTime.finish());
		return this.finish(start);
	}

	/** Null where the cells of a line cannot be told apart. */
	private cellsOf(line: string): string[] | null {
		const { splitDecimals, delimiter } = this.mapping;
		if (!splitDecimals) return splitCells(line, delimiter, this.width);
		const cells = splitCells(line, delimiter, this.width + splitDecimals.columns.length);
		return cells.length < 2 ? cells : joinRow(cells, splitDecimals.shapes, splitDecimals.columns);
	}

	/** Where times that have no date of their own begin. */
	private anchor(): ReturnType<typeof startOf> {
		const start = startOf(this.facts);
		const form = this.mapping.time?.form;
		const clockOfDay = form === 'time-of-day' && this.mapping.time?.dateColumn === null;
		const elapsed = form === undefined || form.startsWith('elapsed');
		if (!clockOfDay && !elapsed) return start;
		const localS = this.options.utcOffsetS ?? 0;
		let startS = this.options.startS;
		if (startS === undefined && start && (start.hasTime || clockOfDay)) {
			startS = start.tS;
			if (!start.hasZone) {
				startS -= localS;
				this.withoutZone++;
			}
		}
		if (startS === undefined) {
			this.warnings.push(
				clockOfDay
					? {
							code: 'no-date',
							message: 'The times have no date. They stand on 1 January 1970 until the date is given.'
						}
					: {
							code: 'no-clock',
							message:
								'The times count from the start of the recording and the file does not say when that was. They begin at 0; give the start time, or align by shape.'
						}
			);
			return null;
		}
		// A time of day counts from the midnight, on the file's own clock, of the day of the start.
		this.baseS = clockOfDay ? Math.floor((startS + localS) / 86_400) * 86_400 - localS : startS;
		return start ?? { tS: startS, hasZone: true, hasTime: true };
	}

	private timeOf(cells: string[]): number {
		const time = this.mapping.time;
		if (!time) return NaN;
		const cell = cells[time.column] ?? '';
		if (cell === '') return NaN;
		switch (time.form) {
			case 'date-time': {
				const parsed = parseDateTime(cell, time.dateOrder);
				if (!parsed) return NaN;
				if (parsed.hasZone) return parsed.tS;
				this.withoutZone++;
				return parsed.tS - (this.options.utcOffsetS ?? 0);
			}
			case 'time-of-day': {
				const clockS = parseTimeOfDay(cell);
				if (Number.isNaN(clockS)) return NaN;
				if (time.dateColumn !== null) {
					const day = parseDateTime(cells[time.dateColumn] ?? '', time.dateOrder);
					if (!day) return NaN;
					this.withoutZone++;
					return day.tS + clockS - (this.options.utcOffsetS ?? 0);
				}
				if (this.lastClockS - clockS > 43_200) this.midnights++;
				this.lastClockS = clockS;
				return this.baseS + clockS + 86_400 * this.midnights;
			}
			case 'elapsed-clock':
				return this.baseS + parseElapsedClock(cell);
			default: {
				if (/\de[+]?\d/i.test(cell)) this.exponents = true;
				const seconds = secondsOfNumber(cellNumber(cell, this.mapping.decimalComma), time.form);
				if (time.form === 'day-number') {
					this.withoutZone++;
					return seconds - (this.options.utcOffsetS ?? 0);
				}
				return time.form.startsWith('elapsed') ? this.baseS + seconds : seconds;
			}
		}
	}

	private wideRow(cells: string[], tS: number, line: number): void {
		let row = -1;
		let filled = false;
		for (const entry of this.kinds) {
			const cell = cells[entry.column] ?? '';
			if (cell === '') continue;
			if (entry.kind === 'rrInterval') {
				this.intervalCell(cell, entry.factor, tS);
				continue;
			}
			const value = cellNumber(cell, this.mapping.decimalComma);
			if (value !== value) continue;
			filled = true;
			if (tS !== tS) continue;
			if (row < 0) row = this.table.addRow(tS);
			this.table.set(
				row,
				entry.kind,
				entry.factor === 1 && entry.offset === 0 ? value : value * entry.factor + entry.offset
			);
		}
		if (row >= 0) return;
		if (filled) this.noTime(line);
		// A row with a time and no values still says that the device was running then.
		else if (tS === tS && !this.kinds.some((entry) => entry.kind === 'rrInterval')) this.table.addRow(tS);
	}

	private longRow(rows: LongRows, cells: string[], tS: number, line: number): void {
		const long = this.mapping.long;
		if (!long) return;
		const entry = long.names[cells[long.nameColumn] ?? ''];
		const value = cellNumber(cells[long.valueColumn] ?? '', this.mapping.decimalComma);
		if (!entry || value !== value) return;
		if (tS !== tS) return this.noTime(line);
		if (entry.kind === 'rrInterval') {
			this.rrMs.push(value * entry.factor);
			this.rrS.push(tS);
			return;
		}
		rows.add(tS, entry.kind, value * entry.factor + entry.offset);
	}

	private noTime(line: number): void {
		if (this.withoutTime++ === 0) this.withoutTimeLine = line;
	}

	private intervalCell(cell: string, factor: number, tS: number): void {
		for (const part of cell.split(/[\s;|]+/)) {
			const value = cellNumber(part, this.mapping.decimalComma);
			if (!(value > 0)) continue;
			this.rrMs.push(value * factor);
			this.rrS.push(tS);
		}
	}

	private finish(start: ReturnType<typeof startOf>): Reading {
		const { warnings } = this;
		for (const note of this.guess?.notes ?? []) warnings.push({ code: note.code, message: note.message });
		if (this.withoutZone > 0)
			warnings.push({
				code: 'no-time-zone',
				message:
					this.options.utcOffsetS === undefined
						? 'The times carry no time zone. They are read as UTC; if the device showed local time, give its offset.'
						: `The times carry no time zone. They are read as ${this.options.utcOffsetS / 3600} h ahead of UTC, as given.`
			});
		if (this.withoutTime > 0)
			warnings.push({
				code: 'row-without-time',
				message: `${counted(this.withoutTime, 'row')} with values but no readable time, first in line ${this.withoutTimeLine}: left out.`,
				at: { line: this.withoutTimeLine }
			});
		if (this.ragged > 0)
			warnings.push({
				code: 'ragged-rows',
				message: `${counted(this.ragged, 'row')} hold more cells than there are column names, first in line ${this.raggedLine}. If a comma is the decimal mark, values may stand in the wrong column: check them.`,
				at: { line: this.raggedLine }
			});
		if (this.doubtful > 0)
			warnings.push({
				code: 'doubtful-rows',
				message: `In ${counted(this.doubtful, 'row')} it cannot be told which commas part cells and which are decimal marks, first in line ${this.doubtfulLine}: left out.`,
				at: { line: this.doubtfulLine }
			});
		if (this.midnights > 0)
			warnings.push({
				code: 'past-midnight',
				message: `The time of day starts again ${counted(this.midnights, 'time')}: the recording is taken to run past midnight into the next day.`
			});
		const activity = activityOf(this.facts);
		if (isOnFoot(activity) && activity !== null && !this.cadenceCountsSteps()) {
			const warning = toSteps(this.table, [...new Array(this.table.n).keys()], activity);
			if (warning) warnings.push(warning);
		}
		this.spreadRoundedTimes();
		const sources = this.heartRateSources();
		const found: FoundInFile = {
			format: 'csv',
			readerVersion: TABLE_READER_VERSION,
			device: deviceOf(this.facts),
			activity,
			table: this.table,
			rowWord: 'row',
			rowsHoldAllChannels: this.mapping.layout !== 'long',
			intervals: this.intervals(),
			heartRateSources: sources,
			withoutDate:
				this.mapping.time?.form.startsWith('epoch') || this.mapping.time?.form === 'date-time' ? false : start === null,
			warnings
		};
		return assemble(found, this.options);
	}

	private cadenceCountsSteps(): boolean {
		const entries = [...this.kinds, ...Object.values(this.mapping.long?.names ?? {})];
		return entries.some((entry) => entry.kind === 'cadence' && entry.countsSteps === true);
	}

	/** Numbers in exponent form keep a few figures only: the time stamps of minutes or hours fall together. */
	private spreadRoundedTimes(): void {
		const { table } = this;
		if (table.n < 10 || !this.exponents) return;
		const distinct = new Set(table.tS.subarray(0, table.n)).size;
		if (distinct > table.n / 5) return;
		const first = table.tS[0];
		for (let row = 0; row < table.n; row++) table.tS[row] = first + row;
		this.warnings.push({
			code: 'rounded-time-stamps',
			message: `The time stamps were saved in a rounded form (such as 1.7186E9): ${counted(table.n, 'row')} have only ${counted(distinct, 'different time')}. The rows are put 1 s apart, in the order of the file; check the spacing and the start before the times are used.`
		});
	}

	private intervals(): IntervalList | undefined {
		if (this.rrMs.length === 0) return undefined;
		if (this.mapping.time && this.rrS.some((t) => t === t)) {
			const keep = [...this.rrS.keys()].filter((i) => this.rrS[i] === this.rrS[i]);
			return stampedIntervals(
				keep.map((i) => this.rrMs[i]),
				keep.map((i) => this.rrS[i])
			);
		}
		// No column of times: the intervals follow each other from the start.
		let t = this.baseS;
		return placeIntervals(
			this.rrMs,
			this.rrMs.map((rr) => (t += rr / 1000))
		);
	}

	private heartRateSources(): HeartRateSource[] {
		const others = this.guess?.otherHeartRates ?? [];
		const values = this.table.column('heartRate')?.filter((value) => value > 0);
		const own = this.kinds.find((entry) => entry.kind === 'heartRate');
		if (others.length === 0 || !own || !values || values.length === 0) return [];
		const name = (column: number) => this.guess?.columnNames[column] ?? `column ${column + 1}`;
		const used = {
			key: name(own.column),
			label: `column ${name(own.column)}`,
			n: values.length,
			min: values.reduce((a, b) => Math.min(a, b)),
			max: values.reduce((a, b) => Math.max(a, b))
		};
		const rest = others.filter((other) => other.column !== own.column);
		this.warnings.push({
			code: 'second-heart-rate-source',
			message: `The table holds ${others.length + 1} heart rates. '${used.key}' is used; the others are ${others.map((other) => `'${other.name}'`).join(', ')}. Choose another at import if it belongs to the device under test.`
		});
		return [
			used,
			...rest.map((other) => ({ key: other.name, label: `column ${other.name}`, n: 0, min: NaN, max: NaN }))
		];
	}
}

/**
 * Guesses how a table is to be read, from its first lines.
 *
 * The header is looked for in the first lines, because many programs write a summary above it. Delimiter and header
 * are chosen together: the pair under which the most column names are known and figures follow. Without any header,
 * content decides: a rising column is the time, a column between 30 and 230 the heart rate.
 */
import type { ChannelKind } from '../recording';
import { cellNumber, LineWalker, splitCells, type Delimiter } from './cells';
import { columnMeaning, nameWords, type ColumnMeaning } from './column-meaning';
import type { ChannelColumn, TableGuess, TableMapping } from './mapping';
import { findSplitColumns, joinRow, type ColumnShape } from './split-decimals';
import {
	dateOrderOf,
	numericTimeForm,
	parseDateTime,
	parseElapsedClock,
	parseTimeOfDay,
	type DateOrder,
	type TimeForm
} from './time-form';

const LOOKED_AT = 400;
const HEADER_WITHIN = 120;
const LONGEST_LINE = 20_000;
const DELIMITERS: Delimiter[] = [';', '\t', ',', '|', ' '];

interface Header {
	delimiter: Delimiter;
	index: number;
	names: string[];
	meanings: (ColumnMeaning | undefined)[];
	score: number;
}

/**
 * Guesses a mapping.
 *
 * @param text the whole text or its beginning
 * @returns the mapping with what the importer should see of it
 */
export function guessTableMapping(text: string): TableGuess {
	const lines = firstLines(text);
	const header = bestHeader(lines);
	if (header) return fromHeader(lines, header);
	const transposed = guessTransposed(text);
	if (transposed) return transposed;
	return fromContent(lines);
}

/** The table with lines and columns exchanged; at most 64 lines of channels are looked at. */
export function transpose(text: string, delimiter: Delimiter): string {
	const walker = new LineWalker(text);
	const rows: string[][] = [];
	for (let line = walker.next(); line !== null && rows.length < 64; line = walker.next())
		if (line.trim() !== '') rows.push(splitCells(line, delimiter));
	const longest = rows.reduce((most, row) => Math.max(most, row.length), 0);
	const out: string[] = [];
	for (let i = 0; i < longest; i++) out.push(rows.map((row) => (row[i] ?? '').replace(/[\t"]/g, ' ')).join('\t'));
	return out.join('\n');
}

function guessTransposed(text: string): TableGuess | null {
	const lines = firstLines(text, Infinity).slice(0, 64);
	for (const delimiter of DELIMITERS) {
		if (delimiter === ' ') continue;
		const names = lines.map((line) => splitCells(line.slice(0, 200), delimiter, 2)[0]);
		const meanings = names.map((name) => columnMeaning(name));
		const hasHeartRate = meanings.some((meaning) => meaning?.role === 'channel' && meaning.kind === 'heartRate');
		const longest = Math.max(...lines.map((line) => line.split(delimiter, 10).length));
		if (!hasHeartRate || !meanings.some((meaning) => meaning?.role === 'time') || longest < 5) continue;
		const inner = guessTableMapping(transpose(text, delimiter));
		if (!inner.mapping) continue;
		return { ...inner, mapping: { ...inner.mapping, layout: 'transposed', delimiter } };
	}
	return null;
}

function firstLines(text: string, longest = LONGEST_LINE): string[] {
	const walker = new LineWalker(text);
	const lines: string[] = [];
	for (let line = walker.next(); line !== null && lines.length < LOOKED_AT; line = walker.next()) {
		// A joined line counts as many as it holds, so that indices stay line numbers.
		while (lines.length < walker.line - 1) lines.push('');
		lines.push(line.slice(0, longest));
	}
	return lines;
}

function bestHeader(lines: string[]): Header | null {
	let best: Header | null = null;
	for (let index = 0; index < Math.min(lines.length, HEADER_WITHIN); index++) {
		const plain = lines[index].replace(/^\s*(#|\/\/|%)\s*/, '');
		if (!/[a-z]/i.test(plain) || plain.length > LONGEST_LINE - 1) continue;
		for (const delimiter of DELIMITERS) {
			if (delimiter !== ' ' && !plain.includes(delimiter)) continue;
			const names = splitCells(plain, delimiter);
			if (names.length < 2 || names.length > 2000) continue;
			const header = scoreHeader(lines, index, delimiter, names);
			if (header && (!best || header.score > best.score)) best = header;
		}
	}
	return best;
}

function scoreHeader(lines: string[], index: number, delimiter: Delimiter, names: string[]): Header | null {
	const meanings = names.map((name) => columnMeaning(name));
	const long =
		meanings.some((meaning) => meaning?.role === 'name') && meanings.some((meaning) => meaning?.role === 'value');
	const hearts = meanings.flatMap((meaning, i) =>
		meaning?.role === 'channel' && (meaning.kind === 'heartRate' || meaning.kind === 'rrInterval') ? [i] : []
	);
	const times = meanings.flatMap((meaning, i) => (meaning?.role === 'time' ? [i] : []));
	if (!long && hearts.length === 0) return null;
	if (long && times.length === 0) return null;
	// A line of values under the names tells a header from a sentence that happens to hold the same words.
	let fitting = 0;
	let filled = 0;
	const commas = usesDecimalComma(lines.slice(index + 1, index + 60), delimiter);
	for (const line of lines.slice(index + 1, index + 60)) {
		const cells = splitCells(line, delimiter);
		if (cells.length < 2) continue;
		filled++;
		if (Math.abs(cells.length - names.length) > Math.max(1, names.length / 2)) continue;
		const numbers = cells.filter((cell) => !Number.isNaN(cellNumber(cell, commas))).length;
		if (numbers > 0) fitting++;
	}
	if (fitting === 0) return null;
	const known = meanings.filter((meaning) => meaning !== undefined).length;
	const blank = delimiter === ' ' ? -2 : 0;
	return {
		delimiter,
		index,
		names,
		meanings,
		score:
			10 * Math.min(known, 8) +
			(10 * fitting) / Math.max(1, filled) +
			(hearts.length ? 5 : 0) +
			(times.length ? 8 : 0) +
			blank +
			Math.min(fitting, 5)
	};
}

/** True where cells such as `3,5` stand in a table that is not parted by commas, or in quotes in one that is. */
function usesDecimalComma(lines: string[], delimiter: Delimiter): boolean {
	let commas = 0;
	let points = 0;
	for (const line of lines)
		for (const cell of splitCells(line, delimiter, 200)) {
			if (/^[-+]?\d+,\d+(e[-+]?\d+)?$/i.test(cell)) commas++;
			else if (/^[-+]?\d+\.\d+$/.test(cell)) points++;
		}
	return commas > points;
}

function fromHeader(lines: string[], header: Header): TableGuess {
	const { delimiter, index, names, meanings } = header;
	const following = lines.slice(index + 1);
	const parted = following.map((line) => splitCells(line, delimiter)).filter((cells) => cells.length > 1);
	const shapes = meanings.map(shapeOf);
	const splitting =
		delimiter === ',' && !following.some((line) => line.includes('"')) ? findSplitColumns(parted, shapes) : null;
	const decimalComma = splitting !== null || usesDecimalComma(following, delimiter);
	const rows = splitting
		? parted.map((cells) => joinRow(cells, shapes, splitting.split)).filter((cells) => cells !== null)
		: parted;
	const notes: TableGuess['notes'] = [];
	const base = {
		delimiter,
		decimalComma,
		headerLine: index + 1,
		firstDataLine: index + 2,
		...(splitting ? { splitDecimals: { columns: splitting.split, shapes } } : {})
	};
	const shown = { columnNames: names, firstRows: rows.slice(0, 12) };
	const nameColumn = meanings.findIndex((meaning) => meaning?.role === 'name');
	const valueColumn = meanings.findIndex((meaning) => meaning?.role === 'value');
	const channelColumns = meanings.flatMap((meaning, column): ChannelColumn[] =>
		meaning?.role === 'channel' && (splitting === null || splitting.sure.has(column))
			? [
					{
						column,
						kind: meaning.kind,
						factor: meaning.factor,
						offset: meaning.offset,
						countsSteps: meaning.countsSteps
					}
				]
			: []
	);
	if (splitting) notes.push(splitDecimalsNote(names, splitting));
	const timeColumns = meanings.flatMap((meaning, column) => (meaning?.role === 'time' ? [column] : []));
	const time = guessTime(rows, names, meanings, timeColumns, decimalComma, notes);
	if (nameColumn >= 0 && valueColumn >= 0 && !channelColumns.some((entry) => entry.kind === 'heartRate')) {
		const long = longNames(rows, nameColumn, valueColumn);
		const mapping: TableMapping | null =
			time && Object.values(long.names).some((entry) => entry.kind === 'heartRate')
				? { ...base, layout: 'long', time, channels: [], long }
				: null;
		if (!mapping)
			notes.push({
				code: 'no-heart-rate-column',
				message: `No row of the column '${names[nameColumn]}' names a heart rate.`
			});
		return { mapping, notes, ...shown, otherHeartRates: [] };
	}
	const { channels, otherHeartRates } = oneColumnPerKind(rows, names, channelColumns, decimalComma);
	if (!time && !channels.some((entry) => entry.kind === 'rrInterval')) {
		notes.push({
			code: 'no-time',
			message: `No column holds times. The columns are: ${names.slice(0, 20).join(', ')}.`
		});
		return { mapping: null, notes, ...shown, otherHeartRates };
	}
	scaleIntervals(rows, channels, decimalComma);
	return { mapping: { ...base, layout: 'wide', time, channels, long: null }, notes, ...shown, otherHeartRates };
}

function shapeOf(meaning: ColumnMeaning | undefined): ColumnShape {
	if (meaning?.role === 'time') return 'time';
	if (meaning?.role !== 'channel') return 'other';
	if (meaning.kind === 'heartRate') return 'heartRate';
	return meaning.kind === 'rrInterval' ? 'other' : 'decimal';
}

function splitDecimalsNote(
	names: string[],
	{ split, sure }: { split: number[]; sure: Set<number> }
): { code: string; message: string } {
	const doubtful = names.filter((_, column) => !sure.has(column));
	return {
		code: 'decimal-comma',
		message:
			`A comma parts the cells and is the decimal mark too. The parts of ${split.map((column) => `'${names[column]}'`).join(', ')} are joined again` +
			(doubtful.length
				? `; ${doubtful.map((name) => `'${name}'`).join(', ')} cannot be told apart and are left out.`
				: '.')
	};
}

/** Where two columns hold the same kind, the one with more values stands; of heart rates the others are offered. */
function oneColumnPerKind(
	rows: string[][],
	names: string[],
	columns: ChannelColumn[],
	decimalComma: boolean
): { channels: ChannelColumn[]; otherHeartRates: { column: number; name: string }[] } {
	const filled = (column: number) => rows.filter((row) => cellNumber(row[column] ?? '', decimalComma) > 0).length;
	const channels: ChannelColumn[] = [];
	const otherHeartRates: { column: number; name: string }[] = [];
	for (const entry of columns) {
		const present = channels.findIndex((candidate) => candidate.kind === entry.kind);
		if (present < 0) {
			channels.push(entry);
			continue;
		}
		const better = filled(entry.column) > filled(channels[present].column);
		const loser = better ? channels[present] : entry;
		if (better) channels[present] = entry;
		if (entry.kind === 'heartRate' && filled(loser.column) > 0)
			otherHeartRates.push({ column: loser.column, name: names[loser.column] });
	}
	return { channels, otherHeartRates };
}

/** Intervals whose header names no unit: values below 10 are seconds. */
function scaleIntervals(rows: string[][], channels: ChannelColumn[], decimalComma: boolean): void {
	for (const entry of channels) {
		if (entry.kind !== 'rrInterval') continue;
		const values = rows
			.map((row) => cellNumber((row[entry.column] ?? '').split(/[\s;|]/)[0], decimalComma))
			.filter((value) => value > 0)
			.sort((a, b) => a - b);
		if (values.length > 0) entry.factor = values[values.length >> 1] < 10 ? 1000 : 1;
	}
}

function longNames(rows: string[][], nameColumn: number, valueColumn: number): NonNullable<TableMapping['long']> {
	const names: Record<string, Omit<ChannelColumn, 'column'>> = {};
	const taken = new Set<ChannelKind>();
	for (const row of rows) {
		const name = row[nameColumn];
		if (!name || name in names) continue;
		const meaning = columnMeaning(name);
		if (meaning?.role !== 'channel' || taken.has(meaning.kind)) continue;
		taken.add(meaning.kind);
		names[name] = {
			kind: meaning.kind,
			factor: meaning.factor,
			offset: meaning.offset,
			countsSteps: meaning.countsSteps
		};
	}
	return { nameColumn, valueColumn, names };
}

const PREFERENCE: TimeForm[] = [
	'date-time',
	'epoch-ns',
	'epoch-us',
	'epoch-ms',
	'epoch-s',
	'day-number',
	'time-of-day',
	'elapsed-clock',
	'elapsed-ms',
	'elapsed-s',
	'elapsed-min'
];

/** Of several columns of times the one that says most: moments before times of day before elapsed time. */
function guessTime(
	rows: string[][],
	names: string[],
	meanings: (ColumnMeaning | undefined)[],
	columns: number[],
	decimalComma: boolean,
	notes: TableGuess['notes']
): TableMapping['time'] {
	let best: TableMapping['time'] = null;
	let bestRank = Infinity;
	let dateColumn: number | null = null;
	for (const column of columns) {
		const cells = rows.map((row) => row[column] ?? '').filter((cell) => cell !== '');
		if (cells.length === 0) continue;
		const meaning = meanings[column];
		const form = timeFormOf(cells, names[column] ?? '', meaning?.role === 'time' && meaning.elapsed, decimalComma);
		if (!form) continue;
		const { order, sure } = dateOrderOf(cells);
		if (
			form === 'date-time' &&
			!parseDateTime(cells[0], order)?.hasTime &&
			cells.every((cell) => !parseDateTime(cell, order)?.hasTime)
		) {
			dateColumn ??= column;
			if (!sure) notes.push(ambiguousDates(order));
			continue;
		}
		// A start or end that is the same in every row is no clock of the rows, unless there is none besides.
		const constant = cells.length > 2 && cells.every((cell) => cell === cells[0]);
		const rank = PREFERENCE.indexOf(form) + (constant ? PREFERENCE.length : 0);
		if (rank >= bestRank) continue;
		bestRank = rank;
		best = { column, form, dateOrder: order, dateColumn: null };
		if (form === 'date-time' && !sure) notes.push(ambiguousDates(order));
	}
	if (best && best.form === 'time-of-day' && dateColumn !== null) {
		const dates = rows.map((row) => row[dateColumn] ?? '');
		best.dateColumn = dateColumn;
		best.dateOrder = dateOrderOf(dates).order;
	}
	return best;
}

function ambiguousDates(order: DateOrder): { code: string; message: string } {
	return {
		code: 'ambiguous-date',
		message: `The dates could be day-month or month-day. They are read with the ${order === 'mdy' ? 'month' : 'day'} first; check the date.`
	};
}

function timeFormOf(cells: string[], name: string, elapsedName: boolean, decimalComma: boolean): TimeForm | null {
	const some = cells.slice(0, 200);
	const share = (test: (cell: string) => boolean) => some.filter(test).length / some.length;
	const numbers = some.map((cell) => cellNumber(cell, decimalComma)).filter((value) => !Number.isNaN(value));
	if (numbers.length >= 0.8 * some.length && share((cell) => parseDateTime(cell) !== null) < 0.5) {
		const { words, unit } = nameWords(name);
		return numericTimeForm(numbers, `${words} ${unit}`.trim());
	}
	const { order } = dateOrderOf(some);
	if (share((cell) => parseDateTime(cell, order) !== null) >= 0.7) return 'date-time';
	const startsAtZero = parseElapsedClock(some[0]) < 60 && !/[ap]\.?m/i.test(some[0]);
	if (share((cell) => !Number.isNaN(parseElapsedClock(cell))) >= 0.7 && (elapsedName || startsAtZero))
		return 'elapsed-clock';
	if (share((cell) => !Number.isNaN(parseTimeOfDay(cell))) >= 0.7) return 'time-of-day';
	if (share((cell) => !Number.isNaN(parseElapsedClock(cell))) >= 0.7) return 'elapsed-clock';
	return null;
}

/** No header: content decides. */
function fromContent(lines: string[]): TableGuess {
	for (const delimiter of DELIMITERS) {
		const all = lines.map((line) => splitCells(line, delimiter));
		const counts = new Map<number, number>();
		for (const cells of all) if (cells.length > 1) counts.set(cells.length, (counts.get(cells.length) ?? 0) + 1);
		const [width, rowsOfWidth] = [...counts].sort((a, b) => b[1] - a[1])[0] ?? [0, 0];
		if (width < 2 || width > 500 || rowsOfWidth < 2) continue;
		const rows = all.filter((cells) => cells.length === width);
		const decimalComma = usesDecimalComma(lines, delimiter);
		const columns = Array.from({ length: width }, (_, column) => rows.map((row) => row[column]));
		const times = columns.flatMap((cells, column) => (risingTime(cells, decimalComma) ? [column] : []));
		const notes: TableGuess['notes'] = [];
		const time = guessTime(rows, [], [], times, decimalComma, notes);
		if (!time) continue;
		const kind = columns.map((cells, column) => (column === time.column ? null : valuesLike(cells, decimalComma)));
		const column = kind.indexOf('heartRate') >= 0 ? kind.indexOf('heartRate') : kind.indexOf('rrInterval');
		if (column < 0) continue;
		const firstRow = all.findIndex((cells) => cells.length === width && cellIsFigure(cells[column], decimalComma));
		const named = all.slice(0, firstRow).findLast((cells) => cells.length === width && /\p{L}/u.test(cells[column]));
		if (named)
			return nothingFound(
				lines,
				`No column is named as a heart rate. The columns are: ${named.slice(0, 20).join(', ')}.`
			);
		notes.push({
			code: 'no-header',
			message: `The table has no column names. Column ${time.column + 1} is taken as the time and column ${column + 1} as the ${kind[column] === 'heartRate' ? 'heart rate' : 'RR interval'}; check them.`
		});
		const channels: ChannelColumn[] = [{ column, kind: kind[column] ?? 'heartRate', factor: 1, offset: 0 }];
		scaleIntervals(rows, channels, decimalComma);
		const firstDataLine = all.findIndex((cells) => cells.length === width) + 1;
		return {
			mapping: { layout: 'wide', delimiter, decimalComma, headerLine: null, firstDataLine, time, channels, long: null },
			notes,
			columnNames: Array.from({ length: width }, (_, i) => `column ${i + 1}`),
			firstRows: rows.slice(0, 12),
			otherHeartRates: []
		};
	}
	const single = lines.map((line) => line.trim()).filter((line) => line !== '');
	if (valuesLike(single.slice(1), false) === 'heartRate')
		return {
			...nothingFound(lines, ''),
			notes: [{ code: 'no-time', message: 'The file holds one column of values like a heart rate and no times.' }]
		};
	return nothingFound(
		lines,
		'No line names a heart rate column, and no column holds values like a heart rate beside a time.'
	);
}

function nothingFound(lines: string[], message: string): TableGuess {
	return {
		mapping: null,
		notes: [{ code: 'no-heart-rate-column', message }],
		columnNames: [],
		firstRows: lines.slice(0, 12).map((line) => [line.slice(0, 200)]),
		otherHeartRates: []
	};
}

function cellIsFigure(cell: string, decimalComma: boolean): boolean {
	return !Number.isNaN(cellNumber(cell, decimalComma));
}

function risingTime(cells: string[], decimalComma: boolean): boolean {
	if (
		cells.filter((cell) => parseDateTime(cell) !== null || !Number.isNaN(parseTimeOfDay(cell))).length >=
		0.9 * cells.length
	)
		return true;
	const numbers = cells.map((cell) => cellNumber(cell, decimalComma));
	let rising = 0;
	for (let i = 1; i < numbers.length; i++) if (numbers[i] > numbers[i - 1]) rising++;
	return numbers.length > 2 && rising >= 0.9 * (numbers.length - 1);
}

function valuesLike(cells: string[], decimalComma: boolean): ChannelKind | null {
	const numbers = cells
		.map((cell) => cellNumber(cell, decimalComma))
		.filter((value) => value > 0)
		.sort((a, b) => a - b);
	if (numbers.length < 0.5 * cells.length || numbers.length < 2) return null;
	const median = numbers[numbers.length >> 1];
	const inside = (low: number, high: number) =>
		numbers.filter((value) => value >= low && value <= high).length >= 0.9 * numbers.length;
	if (median >= 40 && median <= 220 && inside(25, 240)) return 'heartRate';
	if (inside(240, 2500) || inside(0.24, 2.5)) return 'rrInterval';
	return null;
}

/**
 * Guesses how a table is to be read, from its first lines.
 *
 * The header is looked for in the first lines, because many programs write a summary above it. Delimiter and header
 * are chosen together: the pair under which the most column names are known and figures follow. Without any header,
 * content decides: a rising column is the time, a column between 30 and 230 the heart rate.
 */
import type { ChannelKind } from '../recording';
import { cellNumber, LineWalker, splitCells, type Delimiter } from './cells';
import { columnMeaning, type ColumnMeaning } from './column-meaning';
import { cellIsFigure, DELIMITERS, fromContent, scaleIntervals, usesDecimalComma } from './guess-content';
import { guessTime } from './guess-time';
import type { ChannelColumn, TableGuess, TableMapping } from './mapping';
import { findSplitColumns, joinRow, type ColumnShape } from './split-decimals';
import { parseDateTime } from './time-form';

const LOOKED_AT = 400;
const HEADER_WITHIN = 120;
const LONGEST_LINE = 20_000;

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
	// A line of values may hold a word such as `HeartRate` too; names are not figures.
	const figures = names.filter((name) => cellIsFigure(name, false) || parseDateTime(name) !== null).length;
	if (figures > 0.2 * names.length) return null;
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

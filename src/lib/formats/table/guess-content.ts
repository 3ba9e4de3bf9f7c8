/** Tables without column names, and what the cells themselves tell. */
import type { ChannelKind } from '../recording';
import { cellNumber, splitCells, type Delimiter } from './cells';
import { guessTime } from './guess-time';
import type { ChannelColumn, TableGuess } from './mapping';
import { parseDateTime, parseTimeOfDay } from './time-form';

export const DELIMITERS: Delimiter[] = [';', '\t', ',', '|', ' '];

/** True where cells such as `3,5` stand in a table that is not parted by commas, or in quotes in one that is. */
export function usesDecimalComma(lines: string[], delimiter: Delimiter): boolean {
	let commas = 0;
	let points = 0;
	for (const line of lines)
		for (const cell of splitCells(line, delimiter, 200)) {
			if (/^[-+]?\d+,\d+(e[-+]?\d+)?$/i.test(cell)) commas++;
			else if (/^[-+]?\d+\.\d+$/.test(cell)) points++;
		}
	return commas > points;
}

/** Intervals whose header names no unit: values below 10 are seconds. */
export function scaleIntervals(rows: string[][], channels: ChannelColumn[], decimalComma: boolean): void {
	for (const entry of channels) {
		if (entry.kind !== 'rrInterval') continue;
		const values = rows
			.map((row) => cellNumber((row[entry.column] ?? '').split(/[\s;|]/)[0], decimalComma))
			.filter((value) => value > 0)
			.sort((a, b) => a - b);
		if (values.length > 0) entry.factor = values[values.length >> 1] < 10 ? 1000 : 1;
	}
}

/** No header: content decides. */
export function fromContent(lines: string[]): TableGuess {
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

export function cellIsFigure(cell: string, decimalComma: boolean): boolean {
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

/** Which of the columns that hold times is the clock of the rows, and how it is written. */
import { cellNumber } from './cells';
import { nameWords, type ColumnMeaning } from './column-meaning';
import type { TableGuess, TableMapping } from './mapping';
import {
	dateOrderOf,
	numericTimeForm,
	parseDateTime,
	parseElapsedClock,
	parseTimeOfDay,
	type DateOrder,
	type TimeForm
} from './time-form';

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
export function guessTime(
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

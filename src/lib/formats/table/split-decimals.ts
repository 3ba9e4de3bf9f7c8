/**
 * Tables parted by commas in which the comma is the decimal mark too, without quotes: `12:00:01,85,2,5` under
 * `time,hr,speed`. The parts of a number stand in two cells, and all that follows is one column off.
 *
 * Which columns are split is found from the rows: every way of joining as many neighbours as there are cells too many
 * is tried, and the ways are kept in which the time is a time, the heart rate a heart rate, and each joined part a
 * figure. What all remaining ways agree on is read; the rest is left out rather than guessed.
 */
import { parseDateTime, parseTimeOfDay } from './time-form';

/** What a column must look like once its cells are joined. */
export type ColumnShape = 'time' | 'heartRate' | 'decimal' | 'other';

const MOST_WAYS = 3000;

/**
 * Joins the split cells of one row.
 *
 * @param cells as parted by commas
 * @param split indices of the columns whose value is split, increasing
 * @returns one cell a column, decimal parts joined by a comma
 */
export function joinDecimals(cells: string[], split: readonly number[]): string[] {
	const out: string[] = [];
	let at = 0;
	for (let column = 0; at < cells.length; column++) {
		if (split.includes(column) && at + 1 < cells.length) {
			out.push(`${cells[at]},${cells[at + 1]}`);
			at += 2;
		} else out.push(cells[at++]);
	}
	return out;
}

function fits(cells: string[], shapes: readonly ColumnShape[], split: readonly number[]): boolean {
	for (const column of split) if (!/^-?\d+,\d+$/.test(cells[column] ?? '')) return false;
	for (let column = 0; column < shapes.length; column++) {
		const cell = cells[column] ?? '';
		if (cell === '') continue;
		const number = Number(cell.replace(',', '.'));
		if (shapes[column] === 'heartRate' && !(number === 0 || (number >= 25 && number <= 240))) return false;
		if (
			shapes[column] === 'time' &&
			!(number >= 0) &&
			parseDateTime(cell) === null &&
			Number.isNaN(parseTimeOfDay(cell))
		)
			return false;
	}
	return true;
}

function choose(from: readonly number[], count: number, most: number): number[][] {
	let sets: number[][] = [[]];
	for (let k = 0; k < count; k++) {
		const next: number[][] = [];
		for (const set of sets)
			for (const value of from) {
				if (set.length > 0 && value <= set[set.length - 1]) continue;
				next.push([...set, value]);
				if (next.length > most) return [];
			}
		sets = next;
	}
	return sets;
}

/**
 * Finds the columns whose decimal part stands in a cell of its own.
 *
 * @param rows cells of some rows, as parted by commas, none of them quoted
 * @param shapes one per column name
 * @returns split columns and the columns that can be trusted, or null where the rows are no such table
 */
export function findSplitColumns(
	rows: string[][],
	shapes: readonly ColumnShape[]
): { split: number[]; sure: Set<number> } | null {
	const width = shapes.length;
	const surplus = rows.map((row) => row.length - width);
	if (surplus.some((extra) => extra < 0)) return null;
	const most = Math.max(...surplus);
	const full = rows.filter((row) => row.length - width === most);
	if (most < 1 || surplus.filter((extra) => extra > 0).length < 0.5 * rows.length) return null;
	const may = shapes.flatMap((shape, column) => (shape === 'decimal' || shape === 'other' ? [column] : []));
	const good = choose(may, most, MOST_WAYS).filter((split) =>
		full.every((row) => fits(joinDecimals(row, split), shapes, split))
	);
	if (good.length === 0) return null;
	// Speeds and distances have decimals more often than columns that this project does not know.
	const known = (split: number[]) => split.filter((column) => shapes[column] === 'decimal').length;
	const mostKnown = Math.max(...good.map(known));
	const best = good.filter((split) => known(split) === mostKnown);
	const place = (split: number[], column: number) =>
		`${split.filter((other) => other < column).length}${split.includes(column)}`;
	const sure = new Set<number>();
	for (let column = 0; column < width; column++)
		if (best.every((split) => place(split, column) === place(best[0], column))) sure.add(column);
	return { split: best[0], sure };
}

/**
 * Joins a row that may have fewer decimal parts than others, because whole numbers were written without one.
 *
 * @param cells as parted by commas
 * @param shapes one per column name
 * @param split columns that may be split
 * @returns the joined cells with doubtful ones empty, or null where even the order is in doubt
 */
export function joinRow(cells: string[], shapes: readonly ColumnShape[], split: readonly number[]): string[] | null {
	const surplus = cells.length - shapes.length;
	if (surplus <= 0) return cells;
	if (surplus > split.length) return null;
	const ways = choose(split, surplus, MOST_WAYS)
		.map((way) => ({ way, joined: joinDecimals(cells, way) }))
		.filter(({ way, joined }) => joined.length === shapes.length && fits(joined, shapes, way));
	if (ways.length === 0) return null;
	const [first] = ways;
	const agreed = first.joined.map((cell, column) => (ways.every(({ joined }) => joined[column] === cell) ? cell : ''));
	const needed = shapes.flatMap((shape, column) => (shape === 'time' || shape === 'heartRate' ? [column] : []));
	return needed.every((column) => agreed[column] === first.joined[column]) ? agreed : null;
}

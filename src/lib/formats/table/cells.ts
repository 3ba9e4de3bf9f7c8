/** Lines to cells, cells to numbers. */

export type Delimiter = ',' | ';' | '\t' | '|' | ' ';

/** No table for this purpose has more columns; a longer line is cut here, which bounds memory. */
export const MOST_CELLS = 200_000;

/**
 * Cells of one line; quoted cells may hold the delimiter, and doubled quotes stand for one.
 *
 * @param line without its line end
 * @param delimiter a blank stands for any run of blanks
 * @param most cells after this number are not looked at
 */
export function splitCells(line: string, delimiter: Delimiter, most = MOST_CELLS): string[] {
	if (delimiter === ' ') return line.trim().split(/\s+/, most);
	if (!line.includes('"')) {
		const cells = line.split(delimiter, most);
		for (let i = 0; i < cells.length; i++) cells[i] = cells[i].trim();
		return cells;
	}
	const cells: string[] = [];
	let at = 0;
	while (at <= line.length && cells.length < most) {
		let from = at;
		while (line[from] === ' ') from++;
		if (line[from] !== '"') {
			const end = line.indexOf(delimiter, at);
			cells.push(line.slice(at, end < 0 ? undefined : end).trim());
			if (end < 0) break;
			at = end + 1;
			continue;
		}
		let cell = '';
		let k = from + 1;
		for (;;) {
			const quote = line.indexOf('"', k);
			if (quote < 0) {
				cell += line.slice(k);
				k = line.length;
				break;
			}
			cell += line.slice(k, quote);
			k = quote + 1;
			if (line[k] !== '"') break;
			cell += '"';
			k++;
		}
		cells.push(cell.trim());
		const end = line.indexOf(delimiter, k);
		if (end < 0) break;
		at = end + 1;
	}
	return cells;
}

/**
 * A number from a cell; a unit behind it is passed over.
 *
 * @param cell trimmed
 * @param decimalComma true where a comma is the decimal mark
 * @returns NaN for an empty cell or one that is no number
 */
export function cellNumber(cell: string, decimalComma: boolean): number {
	if (cell === '') return NaN;
	const text = decimalComma && cell.includes(',') ? cell.replace(',', '.') : cell;
	const value = Number(text);
	if (value === value) return value;
	const m = /^([-+\u2212]?\d+(?:\.\d+)?)\s*[a-z%°/]{1,8}$/i.exec(text);
	return m ? Number(m[1].replace('\u2212', '-')) : NaN;
}

/** Walks the lines of a text without holding them all; a quoted cell may run over line ends. */
export class LineWalker {
	/** Number of the last line given, from 1; 0 before the first. */
	line = 0;
	private at = 0;

	constructor(private readonly text: string) {}

	/** The next line, or null at the end. */
	next(): string | null {
		let line = this.take();
		if (line === null || !line.includes('"')) return line;
		// An odd number of quotes leaves a cell open; a stray quote must not swallow the file.
		const before = { at: this.at, line: this.line };
		const first = line;
		for (let joined = 0; openQuote(line); joined++) {
			const more = joined < 20 && line.length < 65_536 ? this.take() : null;
			if (more === null) {
				this.at = before.at;
				this.line = before.line;
				return first;
			}
			line += '\n' + more;
		}
		return line;
	}

	private take(): string | null {
		if (this.at >= this.text.length) return null;
		const end = this.text.indexOf('\n', this.at);
		const line = end < 0 ? this.text.slice(this.at) : this.text.slice(this.at, end);
		this.at = end < 0 ? this.text.length : end + 1;
		this.line++;
		return line;
	}
}

function openQuote(line: string): boolean {
	if (line.length > 65_536) return false;
	let quotes = 0;
	for (let i = line.indexOf('"'); i >= 0; i = line.indexOf('"', i + 1)) quotes++;
	return quotes % 2 === 1;
}

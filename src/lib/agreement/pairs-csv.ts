/**
 * Tables of pairs as text: `session,reference,wearable` in any order among further columns, with comma, semicolon, tab
 * or bar between cells, decimal point or comma, quoted cells, any line ends.
 */
import type { PairGroup } from './sessions';

export interface PairsCsvOptions {
	/** Columns whose values split the pairs into strata, in order. */
	by?: readonly string[];
	/** Column that says who; empty cells are told and their rows left out. */
	participantColumn?: string;
	/** Count only rows whose column of this name holds 1. */
	onlyWhere?: string;
}

/** Pairs of one session within one stratum. */
export interface ReadGroup extends PairGroup {
	/** Values of the `by` columns, in their order. */
	stratum: string[];
}

export interface PairsCsv {
	ok: true;
	groups: ReadGroup[];
	columns: string[];
	/** What was passed over, one sentence each. */
	messages: string[];
}
export interface RefusedCsv {
	ok: false;
	error: { code: string; message: string };
}

const DELIMITERS = [',', ';', '\t', '|'];
const EMPTY = new Set(['', 'na', 'nan', 'null', 'none', 'n/a']);
const NUMBER = /^[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?$/;

const refuse = (code: string, message: string): RefusedCsv => ({ ok: false, error: { code, message } });

/**
 * Read a table of pairs.
 *
 * A row without a reference or without a wearable value is no pair. Where the reference has a value and the wearable
 * has none, the row counts as time that the wearable did not cover, each row standing for the same time.
 *
 * @param text the whole table, header first; a byte order mark and lines that start with # are passed over
 * @returns groups in order of first appearance, or why the table cannot be used: the place and the remedy
 */
export function readPairsCsv(text: string, options: PairsCsvOptions = {}): PairsCsv | RefusedCsv {
	const rows = tableRows(text.charCodeAt(0) === 0xfeff ? text.slice(1) : text);
	const header = rows.next();
	if (header.done)
		return refuse(
			'empty',
			'The table is empty. It needs a header with session, reference and wearable, and one row a pair.'
		);
	const delimiter = delimiterOf(header.value.text);
	const columns = cellsOf(header.value.text, delimiter).map((name) => name.trim());
	const lower = columns.map((name) => name.toLowerCase());
	const by = options.by ?? [];
	const asked = [
		'session',
		'reference',
		'wearable',
		...by,
		...(options.participantColumn ? [options.participantColumn] : []),
		...(options.onlyWhere ? [options.onlyWhere] : [])
	];
	for (const name of asked) {
		const found = lower.filter((c) => c === name.toLowerCase()).length;
		if (found === 0)
			return refuse(
				'missing-column',
				`There is no column "${name}". The header has ${columns.map((c) => `"${c}"`).join(', ')}; name the column "${name}" in the first line.`
			);
		if (found > 1) return refuse('column-twice', `The column "${name}" occurs ${found} times. Keep one of them.`);
	}
	const column = (name: string) => lower.indexOf(name.toLowerCase());
	const at = { session: column('session'), reference: column('reference'), wearable: column('wearable') };
	const byAt = by.map(column);
	const participantAt = options.participantColumn ? column(options.participantColumn) : -1;
	const onlyAt = options.onlyWhere ? column(options.onlyWhere) : -1;
	const needed = Math.max(at.session, at.reference, at.wearable, participantAt, onlyAt, ...byAt);

	const groups = new Map<string, GrowingGroup>();
	let zeros = 0;
	const skipped = new Map<string, { count: number; firstLine: number }>();
	const skip = (what: string, line: number) => {
		const entry = skipped.get(what);
		if (entry) entry.count++;
		else skipped.set(what, { count: 1, firstLine: line });
	};
	for (const { text: rowText, line } of rows) {
		const cells = cellsOf(rowText, delimiter);
		if (cells.length <= needed || cells.length > columns.length + 1)
			return refuse(
				'ragged-row',
				`Line ${line} has ${cells.length} cells, the header has ${columns.length}. Check the line for a missing or an extra separator.`
			);
		if (onlyAt >= 0) {
			const flag = cells[onlyAt].trim();
			if (flag === '0') continue;
			if (flag !== '1')
				return refuse('not-a-flag', `Line ${line}: ${options.onlyWhere} is "${flag}"; it must be 0 or 1.`);
		}
		const session = cells[at.session].trim();
		if (session === '') {
			skip('without a session', line);
			continue;
		}
		const participant = participantAt >= 0 ? cells[participantAt].trim() : undefined;
		if (participant === '') {
			skip('without a participant', line);
			continue;
		}
		const reference = numberFrom(cells[at.reference], delimiter);
		const wearable = numberFrom(cells[at.wearable], delimiter);
		for (const [name, value, cell] of [
			['reference', reference, cells[at.reference]],
			['wearable', wearable, cells[at.wearable]]
		] as const) {
			if (value === undefined)
				return refuse(
					'not-a-number',
					`Line ${line}: ${name} is "${cell.trim()}", which is not a number. Correct it, or leave the cell empty where there was no value.`
				);
		}
		if (reference === null || reference === undefined) {
			skip('without a reference value', line);
			continue;
		}
		const stratum = byAt.map((i) => cells[i].trim());
		const key = byAt.length || participant !== undefined ? JSON.stringify([session, participant, stratum]) : session;
		let group = groups.get(key);
		if (!group) groups.set(key, (group = new GrowingGroup(session, participant, stratum)));
		group.soundRows++;
		if (wearable === null || wearable === undefined) {
			skip('without a wearable value', line);
			continue;
		}
		if (reference === 0 || wearable === 0) zeros++;
		group.add(reference, wearable);
	}
	const read = [...groups.values()].map((g) => g.finished());
	const messages = [...skipped].map(
		([what, { count, firstLine }]) =>
			`${count} ${count === 1 ? 'row' : 'rows'} ${what} ${count === 1 ? 'is' : 'are'} no pair, first at line ${firstLine}.`
	);
	if (zeros > 0)
		messages.push(
			`${zeros} ${zeros === 1 ? 'row holds' : 'rows hold'} a 0 and count as written. A heart rate of 0 is no reading: leave such a cell empty.`
		);
	if (!read.some((g) => g.reference.length > 0))
		return refuse(
			'no-pairs',
			`There is no row with both a reference and a wearable value.${messages.length ? ' ' + messages.join(' ') : ''}`
		);
	return { ok: true, groups: read, columns, messages };
}

/** A session's pairs while they are being read. */
class GrowingGroup {
	soundRows = 0;
	private n = 0;
	private reference = new Float64Array(256);
	private wearable = new Float64Array(256);
	constructor(
		readonly session: string,
		readonly participant: string | undefined,
		readonly stratum: string[]
	) {}
	add(reference: number, wearable: number): void {
		if (this.n === this.reference.length) {
			const grown = [new Float64Array(this.n * 2), new Float64Array(this.n * 2)];
			grown[0].set(this.reference);
			grown[1].set(this.wearable);
			[this.reference, this.wearable] = grown;
		}
		this.reference[this.n] = reference;
		this.wearable[this.n++] = wearable;
	}
	finished(): ReadGroup {
		return {
			session: this.session,
			participant: this.participant,
			stratum: this.stratum,
			reference: this.reference.subarray(0, this.n),
			wearable: this.wearable.subarray(0, this.n),
			soundReferenceS: this.soundRows,
			pairedS: this.n
		};
	}
}

/** Lines with their number, quoted line ends joined, empty lines and comments passed over. */
function* tableRows(text: string): Generator<{ text: string; line: number }> {
	// Line ends are \n, \r\n, or, in a table without any \n, \r alone.
	const ending = text.includes('\n') || !text.includes('\r') ? '\n' : '\r';
	const endOf = (from: number) => {
		const end = text.indexOf(ending, from);
		return end < 0 ? text.length : end;
	};
	const quotes = text.includes('"');
	let line = 0;
	let from = 0;
	while (from < text.length) {
		const start = from;
		const firstLine = ++line;
		let end = endOf(from);
		if (quotes) {
			// An odd number of quotes so far: the cell goes on over the line's end.
			while (end < text.length && isOpen(text.slice(start, end))) {
				line++;
				end = endOf(end + 1);
			}
		}
		from = end + 1;
		const row = text.slice(start, text[end - 1] === '\r' ? end - 1 : end);
		if (row.trim() !== '' && !row.startsWith('#')) yield { text: row, line: firstLine };
	}
}

const isOpen = (part: string) => (part.split('"').length - 1) % 2 === 1;

function delimiterOf(header: string): string {
	let best = DELIMITERS[0];
	let bestCount = 0;
	for (const delimiter of DELIMITERS) {
		const names = cellsOf(header, delimiter).map((c) => c.trim().toLowerCase());
		const count =
			names.filter((name) => name === 'session' || name === 'reference' || name === 'wearable').length * 1000 +
			names.length;
		if (count > bestCount) [best, bestCount] = [delimiter, count];
	}
	return best;
}

function cellsOf(row: string, delimiter: string): string[] {
	if (!row.includes('"')) return row.split(delimiter);
	const cells: string[] = [];
	let cell = '';
	let quoted = false;
	for (let i = 0; i < row.length; i++) {
		const c = row[i];
		if (c === '"') {
			if (quoted && row[i + 1] === '"') {
				cell += '"';
				i++;
			} else quoted = !quoted;
		} else if (c === delimiter && !quoted) {
			cells.push(cell);
			cell = '';
		} else cell += c;
	}
	cells.push(cell);
	return cells;
}

/** The number in a cell, null for an empty one, undefined for anything else. */
function numberFrom(cell: string, delimiter: string): number | null | undefined {
	const text = cell.trim().replace('\u2212', '-');
	if (NUMBER.test(text)) return finiteOr(Number(text));
	if (EMPTY.has(text.toLowerCase())) return null;
	// A decimal comma can only stand where commas do not part cells, or in a quoted cell.
	if (text.includes(',') && (delimiter !== ',' || cell.includes(','))) {
		const point = text.replace(',', '.');
		if (NUMBER.test(point)) return finiteOr(Number(point));
	}
	return undefined;
}

const finiteOr = (value: number): number | undefined => (Number.isFinite(value) ? value : undefined);

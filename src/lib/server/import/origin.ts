/**
 * What a file says about where it comes from: the key under which 'which device made this file' is remembered, and
 * guesses at device, wearer and activity. Guesses are shown with a tick; only a remembered answer decides.
 */
import type { Recording } from '../../formats/recording';

type Origin = Pick<Recording, 'device'> & { format: string };

/** Bytes at the start of a table in which its header line is looked for. */
const HEADER_WINDOW_BYTES = 4096;
const MONTHS = new Set(['jan', 'feb', 'mar', 'apr', 'may', 'jun', 'jul', 'aug', 'sep', 'oct', 'nov', 'dec']);

/**
 * `serial:<serial number>` where the file carries one; else `origin:` with maker and product; else, where it says
 * nothing of its device, with the header line of a table and the file's name without digits, dates, wearer codes
 * and the words in `ignoredWords` (a study's activities).
 */
export function originKey(recording: Origin, fileName: string, bytes: Uint8Array, ignoredWords: readonly string[] = []): string {
	const { maker, product, serial } = recording.device;
	if (serial) return `serial:${serial}`;
	if (product) return `origin:${[recording.format, maker ?? '', product].join('|').toLowerCase()}`;
	const header = recording.format === 'csv' || recording.format === 'rr-text' ? headerSignature(bytes) : '';
	return `origin:${[recording.format, (maker ?? '').toLowerCase(), header, fileStem(fileName, ignoredWords)].join('|')}`;
}

/** The header line of a table, lower case, without blanks, quotes and digits; empty when it has none. */
export function headerSignature(bytes: Uint8Array): string {
	const text = new TextDecoder('latin1').decode(bytes.subarray(0, HEADER_WINDOW_BYTES));
	const line = text.split(/\r\n|\r|\n/).find((l) => l.split(/[,;\t]/).filter((cell) => /[a-z]{2}/i.test(cell)).length >= 2);
	if (line === undefined) return '';
	return line.toLowerCase().replace(/[^a-z,;\t_]/g, '').slice(0, 120);
}

/** A file's name without folder, extension, digits, month names, wearer codes and the ignored words. */
export function fileStem(fileName: string, ignoredWords: readonly string[] = []): string {
	const ignored = new Set(ignoredWords.flatMap(words));
	return words(baseName(fileName))
		.filter((w) => !MONTHS.has(w) && !ignored.has(w))
		.join('-');
}

/** The one known code that stands in the file's name by itself, or null. */
export function guessParticipant<T extends { code: string }>(fileName: string, participants: readonly T[]): T | null {
	const name = baseName(fileName).toUpperCase();
	const found = participants.filter((p) => new RegExp(`(^|[^A-Z0-9])${p.code}(?![A-Z0-9])`).test(name));
	return found.length === 1 ? found[0] : null;
}

/** Words of files for what studies call otherwise. */
const SAME_WORD: Record<string, string> = {
	bike: 'cycling', biking: 'cycling', ride: 'cycling', run: 'running', row: 'rowing', walk: 'walking', swim: 'swimming', hike: 'hiking', ergo: 'ergometer', erg: 'ergometer'
};

/** The study's activity that the file's own word and name fit best; null when none or several fit equally. */
export function guessActivity(fileActivity: string | null, fileName: string, activities: readonly string[]): string | null {
	const said = new Set([...words(fileActivity ?? ''), ...words(baseName(fileName))].map((w) => SAME_WORD[w] ?? w));
	const scored = activities
		.map((activity) => ({ activity, score: words(activity).filter((w) => said.has(w)).length }))
		.filter((a) => a.score > 0)
		.sort((a, b) => b.score - a.score);
	if (scored.length === 0 || (scored.length > 1 && scored[0].score === scored[1].score)) return null;
	return scored[0].activity;
}

/** The study's device whose name stands in the file's product or name; null when none or several do. */
export function guessDevice<T extends { name: string; shortName: string }>(recording: Origin, fileName: string, devices: readonly T[]): T | null {
	const { maker, product } = recording.device;
	const product_ = (product ?? '').trim().toLowerCase();
	const exact = devices.filter((d) => d.name.toLowerCase() === product_);
	if (exact.length === 1) return exact[0];
	const said = new Set([...words(maker ?? ''), ...words(product ?? ''), ...words(baseName(fileName))]);
	const found = devices.filter((d) => words(d.shortName).every((w) => said.has(w)) && words(d.shortName).length > 0);
	return found.length === 1 ? found[0] : null;
}

function baseName(fileName: string): string {
	const last = fileName.split(/[\\/]/).at(-1) ?? fileName;
	return last.replace(/(\.(gz|zip))?$/i, '').replace(/\.[a-z0-9]{1,5}$/i, '');
}

function words(text: string): string[] {
	return text
		.toLowerCase()
		.split(/[^a-z]+/)
		.filter((w) => w.length > 1);
}

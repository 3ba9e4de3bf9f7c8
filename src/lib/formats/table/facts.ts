/**
 * What stands above the table: comment lines, `name: value` pairs, or a line of names over a line of values. Device,
 * activity and the moment of the start are taken from there.
 */
import type { RecordedDevice } from '../recording';
import { splitCells, type Delimiter } from './cells';
import { nameWords } from './column-meaning';
import { dateOrderOf, parseDateTime, parseTimeOfDay } from './time-form';

/** Facts by name, lower case. The first of a name stands. */
export type Facts = Map<string, string>;

/**
 * Gathers facts from the lines before the header.
 *
 * @param lines those lines in order
 * @param delimiter of the table
 */
export function factsOf(lines: string[], delimiter: Delimiter): Facts {
	const facts: Facts = new Map();
	const put = (name: string, value: string) => {
		const { words } = nameWords(name);
		const trimmed = value.trim().replace(/^"|"$/g, '');
		if (words && words.length <= 40 && trimmed && trimmed.length <= 200 && !facts.has(words)) facts.set(words, trimmed);
	};
	let names: string[] | null = null;
	for (const line of lines.slice(0, 200)) {
		const plain = line.slice(0, 10_000).replace(/^\s*(#|\/\/|;|%)\s*/, '');
		const cells = splitCells(plain, delimiter);
		const filled = cells.filter((cell) => cell !== '');
		if (names && filled.length > 0 && cells.length <= names.length) {
			for (let i = 0; i < cells.length; i++) put(names[i], cells[i]);
			names = null;
			continue;
		}
		const pair = /^\s*"?([^:=,;\t"]{1,40}?)"?\s*[:=]\s*(.+)$/.exec(plain);
		if (pair && filled.length <= 2) put(pair[1], pair[2]);
		else if (filled.length === 2) put(filled[0], filled[1]);
		else if (filled.length > 2 && filled.every((cell) => !/^[\d.,:-]+$/.test(cell))) names = cells;
	}
	return facts;
}

function first(facts: Facts, pattern: RegExp): string | null {
	for (const [name, value] of facts) if (pattern.test(name)) return value;
	return null;
}

export function deviceOf(facts: Facts): RecordedDevice {
	return {
		maker: first(facts, /^(maker|manufacturer|brand|vendor)$/),
		product: first(facts, /^(device|device name|device model|model|product|product name)$/),
		serial: first(facts, /^(serial|serial number|serial no|device serial|device id|unit id|device uuid)$/),
		firmware: first(facts, /^(firmware|firmware version|software version|fw|fw version)$/)
	};
}

export function activityOf(facts: Facts): string | null {
	return first(facts, /^(activity|activity type|sport|exercise|workout type)$/)?.toLowerCase() ?? null;
}

/** The start as the lines above the table give it: a moment, or a date and a time of day. */
export function startOf(facts: Facts): { tS: number; hasZone: boolean; hasTime: boolean } | null {
	const candidates = [...facts].filter(
		([name]) =>
			/\b(start|started|begin|began|date|datum|recorded|recording|created|time)\b/.test(name) &&
			!/\b(end|stop|birth|duration)\b/.test(name)
	);
	const order = dateOrderOf(candidates.map(([, value]) => value)).order;
	let day: { tS: number; hasZone: boolean; hasTime: boolean } | null = null;
	let dayS = NaN;
	for (const [, value] of candidates) {
		const moment = parseDateTime(value, order);
		if (moment?.hasTime) return moment;
		if (moment) day ??= moment;
		else if (Number.isNaN(dayS)) dayS = parseTimeOfDay(value);
		const epoch = Number(value);
		if (epoch > 1e8 && epoch < 1e14) return { tS: epoch > 1e11 ? epoch / 1000 : epoch, hasZone: true, hasTime: true };
	}
	if (!day) return null;
	return Number.isNaN(dayS) ? day : { tS: day.tS + dayS, hasZone: day.hasZone, hasTime: true };
}

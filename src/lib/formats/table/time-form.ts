/**
 * Times as people and programs write them in tables.
 *
 * Everything ends as seconds: since 1970 where the text has a date, since midnight for a time of day, since the start
 * for elapsed time.
 */

/** Order of the parts of a date written in figures. */
export type DateOrder = 'ymd' | 'dmy' | 'mdy';

/** How a column of times is to be read. */
export type TimeForm =
	| 'date-time'
	| 'epoch-s'
	| 'epoch-ms'
	| 'epoch-us'
	| 'epoch-ns'
	| 'day-number'
	| 'time-of-day'
	| 'elapsed-s'
	| 'elapsed-ms'
	| 'elapsed-min'
	| 'elapsed-clock';

export interface ParsedDateTime {
	/** Epoch seconds, read as UTC where the text has no zone. */
	tS: number;
	hasZone: boolean;
	hasTime: boolean;
}

const CLOCK = String.raw`(\d{1,2}):(\d{2})(?::(\d{2})(?:[.,:](\d+))?)?\s*([ap]\.?m\.?)?`;
const ZONE = String.raw`(z|utc|gmt|(?:utc|gmt)?\s*[+\-\u2212]\d{1,2}(?::?\d{2})?)?`;
const YEAR_FIRST = new RegExp(
	String.raw`^(\d{4})([-/.])(\d{1,2})\2(\d{1,2})(?:[t\s,]+${CLOCK})?\s*${ZONE}(?:\s*\[.*\])?$`,
	'i'
);
const YEAR_LAST = new RegExp(String.raw`^(\d{1,2})([-/.])(\d{1,2})\2(\d{4}|\d{2})(?:[t\s,]+${CLOCK})?\s*${ZONE}$`, 'i');
const COMPACT = /^(\d{4})(\d{2})(\d{2})[t\s_-]?(\d{2})(\d{2})(\d{2})(?:[.,](\d+))?\s*(z|[+-]\d{2}:?\d{2})?$/i;
const CLOCK_ONLY = new RegExp(`^${CLOCK}$`, 'i');
const MONTHS = ['jan', 'feb', 'mar', 'apr', 'may', 'jun', 'jul', 'aug', 'sep', 'oct', 'nov', 'dec'];
const CLOCK_INSIDE = new RegExp(CLOCK, 'i');

function zoneOffsetS(zone: string | undefined): number | null {
	if (!zone) return null;
	const text = zone
		.toLowerCase()
		.replace(/utc|gmt|\s/g, '')
		.replace('\u2212', '-');
	if (text === '' || text === 'z') return 0;
	const match = /^([+-])(\d{1,2}):?(\d{2})?$/.exec(text);
	if (!match) return 0;
	return (match[1] === '-' ? -1 : 1) * (Number(match[2]) * 3600 + Number(match[3] ?? 0) * 60);
}

function secondsOfDay(
	h: string,
	m: string,
	s: string | undefined,
	fraction: string | undefined,
	half: string | undefined
): number {
	let hour = Number(h);
	if (half) hour = (hour % 12) + (/^p/i.test(half) ? 12 : 0);
	const minute = Number(m);
	const second = Number(s ?? 0);
	if (minute > 59 || second > 60) return NaN;
	return hour * 3600 + minute * 60 + second + (fraction ? Number(`0.${fraction}`) : 0);
}

function fromParts(
	year: number,
	month: number,
	day: number,
	dayS: number,
	zone: string | undefined,
	hasTime: boolean
): ParsedDateTime | null {
	if (month < 1 || month > 12 || day < 1 || day > 31 || !(dayS < 90_000)) return null;
	const midnight = Date.UTC(2000, month - 1, day);
	const date = new Date(midnight);
	// `Date.UTC` reads years below 100 as 19xx.
	date.setUTCFullYear(year, month - 1, day);
	if (date.getUTCMonth() !== month - 1) return null;
	const offsetS = zoneOffsetS(zone);
	return { tS: date.getTime() / 1000 + dayS - (offsetS ?? 0), hasZone: offsetS !== null, hasTime };
}

/**
 * A date with or without a time of day: ISO 8601 in its usual shapes, figures with the year first or last, month names.
 *
 * @param text one cell, trimmed
 * @param order order of day and month where the year stands last
 * @returns null where the text is no date
 */
export function parseDateTime(text: string, order: DateOrder = 'dmy'): ParsedDateTime | null {
	if (text.length < 6 || text.length > 64) return null;
	let m = YEAR_FIRST.exec(text);
	if (m) {
		const dayS = m[5] === undefined ? 0 : secondsOfDay(m[5], m[6], m[7], m[8], m[9]);
		return fromParts(Number(m[1]), Number(m[3]), Number(m[4]), dayS, m[10], m[5] !== undefined);
	}
	m = YEAR_LAST.exec(text);
	if (m) {
		const dayS = m[5] === undefined ? 0 : secondsOfDay(m[5], m[6], m[7], m[8], m[9]);
		const [day, month] = order === 'mdy' ? [m[3], m[1]] : [m[1], m[3]];
		const year = Number(m[4]) < 100 ? 2000 + Number(m[4]) : Number(m[4]);
		return fromParts(year, Number(month), Number(day), dayS, m[10], m[5] !== undefined);
	}
	m = COMPACT.exec(text);
	if (m)
		return fromParts(
			Number(m[1]),
			Number(m[2]),
			Number(m[3]),
			secondsOfDay(m[4], m[5], m[6], m[7], undefined),
			m[8],
			true
		);
	return withMonthName(text);
}

/** `4 May 2024 07:31:02`, `Sat May 04 07:31:02 GMT+02:00 2024`, `May 4, 2024, 7:31:02 AM`. */
function withMonthName(text: string): ParsedDateTime | null {
	const lower = text.toLowerCase();
	const name = /\b(jan|feb|mar|apr|may|jun|jul|aug|sep|oct|nov|dec)[a-z]*\b/.exec(lower);
	if (!name) return null;
	const clock = CLOCK_INSIDE.exec(lower);
	const rest = clock ? lower.replace(clock[0], ' ') : lower;
	const zone = /(?:utc|gmt)?\s*[+-]\d{2}:?\d{2}\b|\butc\b|\bgmt\b|\bz\b/.exec(rest)?.[0];
	const figures = (zone ? rest.replace(zone, ' ') : rest).match(/\d+/g)?.map(Number) ?? [];
	const year = figures.find((value) => value >= 1900 && value < 3000);
	const day = figures.find((value) => value >= 1 && value <= 31);
	if (year === undefined || day === undefined) return null;
	const dayS = clock ? secondsOfDay(clock[1], clock[2], clock[3], clock[4], clock[5]) : 0;
	return fromParts(year, MONTHS.indexOf(name[1]) + 1, day, dayS, zone?.trim(), clock !== null);
}

/** Seconds since midnight of a time of day such as `07:31:02.5` or `7:31 pm`; NaN where the text is none. */
export function parseTimeOfDay(text: string): number {
	const m = CLOCK_ONLY.exec(text);
	return m ? secondsOfDay(m[1], m[2], m[3], m[4], m[5]) : NaN;
}

/** Seconds of elapsed time such as `0:05:12`, `05:12` (minutes and seconds), `1:02:03.4`; NaN where the text is none. */
export function parseElapsedClock(text: string): number {
	const m = /^(?:(\d+):)?(\d{1,3}):(\d{1,2}(?:[.,]\d+)?)$/.exec(text);
	if (!m) return NaN;
	return Number(m[1] ?? 0) * 3600 + Number(m[2]) * 60 + Number(m[3].replace(',', '.'));
}

/** Which order the dates of a column have; `sure` is false where every date could be read both ways. */
export function dateOrderOf(cells: string[]): { order: DateOrder; sure: boolean } {
	let mayBeDmy = true;
	let mayBeMdy = true;
	let yearLast = false;
	for (const cell of cells) {
		const m = YEAR_LAST.exec(cell);
		if (!m) continue;
		yearLast = true;
		if (Number(m[1]) > 12) mayBeMdy = false;
		if (Number(m[3]) > 12) mayBeDmy = false;
		// A point between the figures is written with the day first.
		if (m[2] === '.') mayBeMdy = false;
	}
	if (!yearLast) return { order: 'ymd', sure: true };
	if (mayBeDmy !== mayBeMdy) return { order: mayBeDmy ? 'dmy' : 'mdy', sure: true };
	// Where the clock has halves of a day, the month is mostly written first.
	return { order: cells.some((cell) => /[ap]\.?m\.?$/i.test(cell)) ? 'mdy' : 'dmy', sure: false };
}

/** Seconds of a number in a numeric form; `elapsed` forms count from the start, `epoch` forms and `day-number` from 1970. */
export function secondsOfNumber(value: number, form: TimeForm): number {
	switch (form) {
		case 'epoch-ms':
		case 'elapsed-ms':
			return value / 1e3;
		case 'epoch-us':
			return value / 1e6;
		case 'epoch-ns':
			return value / 1e9;
		case 'elapsed-min':
			return value * 60;
		case 'day-number':
			// Days since 1899-12-30, as spreadsheets count; rounded to the millisecond that they can hold.
			return Math.round((value - 25_569) * 86_400_000) / 1000;
		default:
			return value;
	}
}

/**
 * How a column of numbers counts time, by size of the values and by its name.
 *
 * @param values some values of the column in order, finite
 * @param name its header, lower case, '' where there is none
 */
export function numericTimeForm(values: number[], name: string): TimeForm {
	const largest = Math.max(...values.map(Math.abs));
	if (largest > 1e16) return 'epoch-ns';
	if (largest > 1e14) return 'epoch-us';
	if (largest > 1e11) return 'epoch-ms';
	if (largest > 1e8) return 'epoch-s';
	const steps = values
		.slice(1)
		.map((value, i) => value - values[i])
		.filter((step) => step > 0)
		.sort((a, b) => a - b);
	const step = steps[steps.length >> 1] ?? 1;
	if (values[0] > 20_000 && largest < 80_000 && step < 0.1 && /date|time|zeit|datum|^$/.test(name)) return 'day-number';
	if (/\bms\b|_ms$|milli/.test(name)) return 'elapsed-ms';
	if (/\bmin(ute)?s?\b|_min$/.test(name)) return 'elapsed-min';
	if (/\b(s|sec|secs|seconds?|sek|sekunden)\b|_s$/.test(name)) return 'elapsed-s';
	return step >= 200 ? 'elapsed-ms' : 'elapsed-s';
}

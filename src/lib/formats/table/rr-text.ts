/**
 * Plain lists of RR intervals: one interval a line (ms or s), or pairs of time and interval.
 *
 * Comment and name lines are passed over; `name: value` lines above the list may give device and start. Without a
 * start the beats count from 0 (`no-clock`). Intervals separated by commas or blanks on one line are taken as well.
 */
import { assemble } from '../assemble';
import { placeIntervals, stampedIntervals } from '../beats';
import type { Reading, ReadingWarning, ReadOptions } from '../recording';
import { SampleTable } from '../sample-table';
import { LineWalker } from './cells';
import { columnMeaning } from './column-meaning';
import { activityOf, deviceOf, factsOf, startOf } from './facts';

export const RR_READER_VERSION = 'rr-text 1';

interface RrList {
	values: number[];
	/** First of two figures a line, where each line is a pair. */
	times: number[] | null;
	above: string[];
}

/**
 * True where the text is a list of figures and little else, and the figures are intervals between beats.
 *
 * @param text decoded text
 */
export function looksLikeRrText(text: string): boolean {
	const list = readFigures(text.length > 100_000 ? text.slice(0, text.lastIndexOf('\n', 100_000)) : text);
	if (list === null || list.values.length < 2 || unitOf(list.values) === null) return false;
	// Named columns of time and interval are a table.
	const names = (list.above.at(-1) ?? '').split(/[,;\t]/).map((name) => columnMeaning(name));
	return !(names.length > 1 && names.some((meaning) => meaning?.role === 'time'));
}

/** 1 for ms, 1000 for s; null where the figures are no intervals. */
function unitOf(values: number[]): number | null {
	const sorted = values.filter((value) => value > 0).sort((a, b) => a - b);
	if (sorted.length < 2) return null;
	const median = sorted[sorted.length >> 1];
	if (median >= 240 && median <= 2500) return 1;
	if (median >= 0.24 && median <= 2.5) return 1000;
	return null;
}

function readFigures(text: string): RrList | null {
	const walker = new LineWalker(text);
	const above: string[] = [];
	const first: number[] = [];
	const second: number[] = [];
	let lines = 0;
	let pairs = 0;
	let other = 0;
	for (let line = walker.next(); line !== null; line = walker.next()) {
		if (line.length > 1_000_000) return null;
		const plain = line.trim();
		if (plain === '') continue;
		// A comma between figures parts them only where blanks or semicolons do not; `0,812` on its own is a decimal comma.
		const parts = /^[012],\d+$/.test(plain)
			? [plain.replace(',', '.')]
			: plain.replace(/(\d),(\d)/g, /[;\s]/.test(plain) ? '$1.$2' : '$1 $2').split(/[\s;,]+/);
		const figures = parts.filter((part) => part !== '').map(Number);
		if (figures.length === 0 || figures.some((value) => Number.isNaN(value))) {
			if (first.length === 0 && above.length < 100) above.push(line);
			else other++;
			continue;
		}
		lines++;
		if (figures.length === 2) pairs++;
		if (figures.length > 2) for (const value of figures) first.push(value);
		else {
			first.push(figures[0]);
			if (figures.length === 2) second.push(figures[1]);
		}
	}
	if (first.length < 2 || other > 0.05 * lines + 1) return null;
	if (pairs === lines && second.length === first.length) {
		const rising = first.every((value, i) => i === 0 || value >= first[i - 1]);
		if (rising && unitOf(second) !== null) return { values: second, times: first, above };
		return null;
	}
	return pairs === 0 ? { values: first, times: null, above } : null;
}

/**
 * Reads a list of RR intervals.
 *
 * @param text decoded text for which `looksLikeRrText` holds
 * @param options start time, where the importer knows it
 * @returns a recording with the intervals and a heart rate derived from them
 */
export function readRrText(text: string, options: ReadOptions = {}): Reading {
	const list = readFigures(text);
	const unit = list && unitOf(list.values);
	if (!list || !unit)
		return {
			ok: false,
			refusal: {
				code: 'no-heart-rate',
				message: 'The figures in this text are no intervals between beats (300 to 2000 ms).'
			},
			warnings: []
		};
	const facts = factsOf(list.above, ',');
	const warnings: ReadingWarning[] = [];
	const start = startOf(facts);
	let startS = options.startS ?? NaN;
	if (Number.isNaN(startS) && start?.hasTime) {
		startS = start.tS - (start.hasZone ? 0 : (options.utcOffsetS ?? 0));
		if (!start.hasZone)
			warnings.push({
				code: 'no-time-zone',
				message: 'The start carries no time zone. It is read as UTC; if the device showed local time, give its offset.'
			});
	}
	const rrMs: number[] = [];
	const stamps: number[] = [];
	const timeScale = list.times ? pairScale(list.times, list.values, unit) : 1;
	const absolute = list.times !== null && list.times[0] / timeScale > 1e8;
	if (Number.isNaN(startS)) {
		startS = 0;
		if (!absolute)
			warnings.push({
				code: 'no-clock',
				message: 'The list does not say when it begins. The beats count from 0; give the start time, or align by shape.'
			});
	}
	let t = startS;
	for (let i = 0; i < list.values.length; i++) {
		const rr = list.values[i] * unit;
		if (!(rr > 0)) continue;
		t += rr / 1000;
		rrMs.push(rr);
		stamps.push(list.times ? (absolute ? 0 : startS) + list.times[i] / timeScale : t);
	}
	return assemble(
		{
			format: 'rr-text',
			readerVersion: RR_READER_VERSION,
			device: deviceOf(facts),
			activity: activityOf(facts),
			table: new SampleTable(1),
			rowWord: 'line',
			intervals: list.times ? stampedIntervals(rrMs, stamps) : placeIntervals(rrMs, stamps),
			withoutDate: !absolute,
			warnings
		},
		options
	);
}

/** 1000 where the times of pairs count ms, 1 where they count s: the span of the times fits the sum of the intervals. */
function pairScale(times: number[], values: number[], unit: number): number {
	const sumS = values.reduce((sum, value) => sum + (value > 0 ? value * unit : 0), 0) / 1000;
	const span = times[times.length - 1] - times[0];
	return Math.abs(Math.log(span / 1000 / sumS)) < Math.abs(Math.log(span / sumS)) ? 1000 : 1;
}

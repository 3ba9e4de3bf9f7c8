/** The plot in words: what a reader hears who does not see it, and sentences that say what is so when something is missing. */
import type { ShiftEstimate } from '../../signal/shift';
import { clockTime, duration, fixed, signed } from '../../text/figures';
import { traceName } from '../words';
import { spanOnAxis, type BenchTrack, type ClockPlace } from './bench-track';
import { differenceLine, type CursorValue } from './difference';
import { valueAt } from './line-path';
import type { LaneTag } from './lane-layout';

type PlaceOf = (recordingId: string) => ClockPlace;

const count = (n: number, one: string, many = `${one}s`): string => `${n} ${n === 1 ? one : many}`;

/** Gaps inside a recording and its largest one, s. */
export function gapsOf({ heartRate }: BenchTrack): { count: number; longestS: number } {
	let gaps = 0;
	let longestS = 0;
	for (let i = 1; i < heartRate.tS.length; i++) {
		const step = heartRate.tS[i] - heartRate.tS[i - 1];
		if (step <= heartRate.gapS) continue;
		gaps++;
		longestS = Math.max(longestS, step);
	}
	return { count: gaps, longestS };
}

/** Largest difference of a wearable from the reference and when it stood, on the axis; null when they share no moment. */
export function largestDifference(track: BenchTrack, reference: BenchTrack, place: ClockPlace): { bpm: number; atS: number } | null {
	const { tS, value } = differenceLine(track.heartRate, reference.heartRate, place, track.firstS);
	let best = -1;
	for (let i = 0; i < value.length; i++) if (!Number.isNaN(value[i]) && (best < 0 || Math.abs(value[i]) > Math.abs(value[best]))) best = i;
	if (best < 0) return null;
	return { bpm: value[best], atS: tS[best] + place.offsetS + place.driftPpm * 1e-6 * (tS[best] - track.firstS) };
}

/** One paragraph: span, traces, gaps, tags, largest difference and when. */
export function summaryInWords(title: string, tracks: readonly BenchTrack[], placeOf: PlaceOf, lanes: readonly (readonly LaneTag[])[]): string {
	const spans = tracks.flatMap((t) => spanOnAxis(t, placeOf(t.recordingId)) ?? []);
	const reference = tracks.find((t) => t.role === 'reference') ?? null;
	const sentences: string[] = [];
	if (spans.length === 0) sentences.push(`${title} holds no samples.`);
	else {
		const fromS = Math.min(...spans.map((s) => s.fromS));
		const toS = Math.max(...spans.map((s) => s.toS));
		sentences.push(`${title}, ${clockTime(fromS)} to ${clockTime(toS)} UTC, ${duration(toS - fromS)}.`);
	}
	sentences.push(`${count(tracks.length, 'trace')}: ${tracks.map((t) => (t.role === 'reference' ? `${t.name} (reference)` : traceName(t))).join(', ')}.`);
	for (const t of tracks) {
		const gaps = gapsOf(t);
		if (t.heartRate.tS.length === 0) sentences.push(`${traceName(t)} holds no heart rate.`);
		else if (gaps.count > 0) sentences.push(`${traceName(t)} has ${count(gaps.count, 'gap')}, the longest ${duration(gaps.longestS)}.`);
	}
	const tags = lanes.flat();
	const proposed = tags.filter((t) => t.proposed).length;
	sentences.push(tags.length === 0 ? 'No tags.' : `${count(tags.length, 'tag')}${proposed ? `, ${proposed} of them proposed` : ''}.`);
	if (reference) {
		for (const t of tracks) {
			if (t.role !== 'wearable') continue;
			const most = largestDifference(t, reference, placeOf(t.recordingId));
			if (most) sentences.push(`Largest difference of ${t.shortName}: ${aboveBelow(most.bpm)} at ${clockTime(most.atS)}.`);
		}
	}
	return sentences.join(' ');
}

function aboveBelow(differenceBpm: number): string {
	const rounded = Math.round(differenceBpm);
	return rounded === 0 ? 'equal' : `${Math.abs(rounded)} ${rounded > 0 ? 'above' : 'below'}`;
}

/** What stands at the cursor: `07:51:28. Halden 150. Wrenna 170, 20 above, in cadence lock.` */
export function cursorInWords(
	cursorS: number,
	tracks: readonly BenchTrack[],
	valueOf: (recordingId: string) => CursorValue,
	lanes: readonly (readonly LaneTag[])[]
): string {
	const parts = tracks.map((track, i) => {
		const { bpm, differenceBpm } = valueOf(track.recordingId);
		const inside = lanes[i]?.find((t) => t.fromS <= cursorS && cursorS < t.toS);
		const words = [bpm === null ? `${track.shortName} no reading` : `${track.shortName} ${fixed(bpm, 0)}`];
		if (track.role === 'wearable' && differenceBpm !== null && Math.round(differenceBpm) !== 0) words.push(aboveBelow(differenceBpm));
		if (inside) words.push(`in ${inside.proposed ? 'a proposed ' : ''}${inside.kind.name.toLowerCase()}`);
		return `${words.join(', ')}.`;
	});
	return [`${clockTime(cursorS)}.`, ...parts].join(' ');
}

/** Spoken value of the offset slider: `plus 3.42 seconds, correlation 0.965, at the peak`. */
export function offsetInWords(offsetS: number, r: number | null, peakS: number | null, locked: boolean): string {
	const sign = offsetS < 0 ? 'minus ' : offsetS > 0 ? 'plus ' : '';
	const words = [`${sign}${Math.abs(offsetS).toFixed(2)} seconds`];
	if (r !== null) words.push(`correlation ${fixed(r, 3)}`);
	if (peakS !== null) {
		const away = offsetS - peakS;
		words.push(Math.abs(away) < 0.005 ? 'at the peak' : `${Math.abs(away).toFixed(2)} seconds ${away > 0 ? 'above' : 'below'} the peak`);
	}
	if (locked) words.push('locked');
	return words.join(', ');
}

/** Trust in a few words, for the head of the reading; the reason follows as a sentence of its own. */
export function trustInWords(estimate: ShiftEstimate | null): string {
	if (!estimate) return 'not searched yet';
	if (estimate.bestFitShiftS === null) return 'not determinable';
	return estimate.reliable ? 'reliable' : 'not reliable';
}

/** What keeps this session from being compared, one sentence each; empty when all is there. */
export function obstacles(tracks: readonly BenchTrack[], placeOf: PlaceOf, estimateOf: (recordingId: string) => ShiftEstimate | null = () => null): string[] {
	const reference = tracks.find((t) => t.role === 'reference');
	const wearables = tracks.filter((t) => t.role === 'wearable');
	const said: string[] = [];
	if (tracks.length === 0) return ['This session holds no recordings. Bring in its files, or put them here from another session.'];
	if (!reference) said.push('This session has no reference, so nothing can be aligned or compared. Bring in the strap’s file of the same time; tags can be set meanwhile.');
	if (wearables.length === 0) said.push('This session holds the reference alone. Bring in the files of the wearables worn with it.');
	for (const t of tracks) {
		if (t.heartRate.tS.length === 0) said.push(`${traceName(t)} holds no heart rate.`);
		else if (t.heartRate.tS.length === 1) said.push(`${traceName(t)} holds one single reading: no offset can be found from it.`);
	}
	const at = reference && spanOnAxis(reference, placeOf(reference.recordingId));
	if (reference && at) {
		for (const t of wearables) {
			const span = spanOnAxis(t, placeOf(t.recordingId));
			if (!span) continue;
			const apartS = span.fromS > at.toS ? span.fromS - at.toS : at.fromS > span.toS ? at.fromS - span.toS : null;
			if (apartS === null) continue;
			const where = span.fromS > at.toS ? 'begins' : 'ends';
			const side = span.fromS > at.toS ? 'after the reference ends' : 'before the reference begins';
			said.push(`${traceName(t)} ${where} ${duration(Math.max(1, apartS))} ${side}, at its offset of ${signed(placeOf(t.recordingId).offsetS, 2)} s. ${wayOut(estimateOf(t.recordingId))}`);
		}
	}
	return said;
}

function wayOut(estimate: ShiftEstimate | null): string {
	if (estimate?.reliable && estimate.bestFitShiftS !== null) return `The search found a reliable best fit at ${signed(estimate.bestFitShiftS, 2)} s: hold it and press P to put it there.`;
	return 'Choose a candidate on the offset rule, or check that the file belongs here.';
}

export interface TableRow {
	tS: number;
	values: { recordingId: string; bpm: number | null; differenceBpm: number | null }[];
}

/** The shown part as rows, for "Read as table": one row every `stepS`, at most `most` of them. */
export function tableOf(
	fromS: number,
	toS: number,
	tracks: readonly BenchTrack[],
	placeOf: PlaceOf,
	most = 240
): { stepS: number; rows: TableRow[] } {
	const reference = tracks.find((t) => t.role === 'reference') ?? null;
	const stepS = [10, 30, 60, 300, 600, 3600].find((s) => (toS - fromS) / s <= most) ?? 3600;
	const rows: TableRow[] = [];
	for (let tS = Math.ceil(fromS / stepS) * stepS; tS <= toS; tS += stepS) {
		const referenceBpm = reference ? valueAt(reference.heartRate, tS) : null;
		rows.push({
			tS,
			values: tracks.map((track) => {
				const place = placeOf(track.recordingId);
				const ownS = track.firstS + (tS - place.offsetS - track.firstS) / (1 + place.driftPpm * 1e-6);
				const bpm = valueAt(track.heartRate, ownS);
				return { recordingId: track.recordingId, bpm, differenceBpm: track.role === 'wearable' && bpm !== null && referenceBpm !== null ? bpm - referenceBpm : null };
			})
		});
	}
	return { stepS, rows };
}

/**
 * A device that stops its clock in a pause: before the pause one shift fits, after it another. No single shift is right
 * then; the recording is split where the shift changes and each part placed by itself.
 */
import type { Trace } from '../formats/recording';
import type { ShiftSearch } from './best-fit-shift';
import { compared, type Compared } from './disagreement';
import { heartRateGrid } from './second-grid';
import type { ShiftEstimate } from './shift';

type Readings = Pick<Trace, 'tS' | 'value'>;

/** A stretch of the wearable with a shift of its own. */
export interface Part {
	/** First and last time on the wearable's own clock, epoch s. */
	fromS: number;
	toS: number;
	estimate: ShiftEstimate;
}

/** A part has at least this much, s: less cannot be placed by itself. */
const LEAST_PART_S = 480;
/** Shifts of neighbouring parts differ by at least this much, s; less is drift or noise. */
const LEAST_STEP_S = 8;
/** Agreement (1 = same level, 0.5 = 7 bpm apart) above which a second speaks for a shift. */
const AGREES = 0.6;
/** Mean agreement below which a stretch does not belong to a shift. */
const STRANGE = 0.45;
const MOST_PARTS = 5;

/**
 * Splits a wearable's recording where its clock (or the reference's) left time out.
 *
 * @param search how to look for a shift
 * @param whole the result for the whole recording
 * @returns two to five parts in time order, every one reliably placed; null when one shift serves the whole recording
 */
export function splitAtPauses(reference: Readings, wearable: Readings, search: (reference: Readings, wearable: Readings) => ShiftSearch, whole: ShiftSearch): Part[] | null {
	const parts = split(reference, wearable, search, whole, MOST_PARTS);
	return parts.length > 1 && parts.every((part) => part.estimate.reliable) ? parts : null;
}

/** What a split means, in one sentence. */
export function pauseSentence(parts: readonly Part[]): string {
	const steps = parts.slice(1).map((part, i) => (part.estimate.bestFitShiftS ?? 0) - (parts[i].estimate.bestFitShiftS ?? 0));
	const told = steps.map((step, i) => `${Math.abs(Math.round(step))} s at ${new Date(1000 * parts[i + 1].fromS).toISOString().slice(11, 19)}`);
	const side = steps.every((s) => s > 0) ? 'The wearable' : steps.every((s) => s < 0) ? 'The reference' : 'One of the devices';
	return `${side} left out paused time (${told.join(', ')} on the wearable's clock), so no single shift fits. Split the recording there.`;
}

function split(reference: Readings, wearable: Readings, search: (reference: Readings, wearable: Readings) => ShiftSearch, found: ShiftSearch, most: number): Part[] {
	const undivided: Part[] = [{ fromS: wearable.tS[0], toS: wearable.tS[wearable.tS.length - 1], estimate: found.estimate }];
	const { bestFitShiftS } = found.estimate;
	if (most < 2 || bestFitShiftS === null) return undivided;
	const [r, w] = [heartRateGrid(reference), heartRateGrid(wearable)].map((grid) => compared(grid.startS, grid.value));
	const plainS = found.evidence?.refined.plainS ?? bestFitShiftS;
	const strange = strangeEnd(r, w, plainS);
	if (strange === null) return undivided;
	const stranger = within(wearable, w.startS + strange.from, w.startS + strange.to);
	const other = search(reference, stranger);
	const otherS = other.evidence?.refined.plainS ?? null;
	if (otherS === null || !other.estimate.reliable || Math.abs(otherS - plainS) < LEAST_STEP_S) return undivided;
	const [beforeS, afterS] = strange.from === 0 ? [otherS, plainS] : [plainS, otherS];
	const cutS = w.startS + changePoint(r, w, beforeS, afterS);
	const sides = [within(wearable, -Infinity, cutS - 1), within(wearable, cutS, Infinity)];
	if (sides.some((side) => side.tS.length < 2)) return undivided;
	const parts: Part[] = [];
	for (const side of sides) parts.push(...split(reference, side, search, search(reference, side), most - 1));
	return parts.every((part) => part.estimate.reliable) && parts.length <= MOST_PARTS ? parts : undivided;
}

/** The longest beginning or end of the wearable (seconds of its grid) that does not belong to the shift; null when there is none. */
function strangeEnd(r: Compared, w: Compared, shiftS: number): { from: number; to: number } | null {
	const n = w.value.length;
	if (n < 2 * LEAST_PART_S) return null;
	const agreement = perSecond(r, w, shiftS);
	// The sum of (agreement − limit) from the start falls through a strange beginning and rises where the shift fits.
	let sum = 0;
	let lowest = 0;
	let highest = 0;
	let begins = 0;
	let ends = n;
	for (let i = 0; i < n; i++) {
		const a = agreement[i];
		if (a === a) sum += a - AGREES;
		if (sum < lowest) {
			lowest = sum;
			begins = i + 1;
		}
		if (sum > highest) {
			highest = sum;
			ends = i + 1;
		}
	}
	const stretches = [
		{ from: 0, to: begins },
		{ from: ends, to: n }
	].filter(({ from, to }) => to - from >= LEAST_PART_S && n - (to - from) >= LEAST_PART_S && mean(agreement, from, to) < STRANGE);
	return stretches.sort((a, b) => b.to - b.from - (a.to - a.from))[0] ?? null;
}

/** The second of the wearable's grid from which the later shift serves better than the earlier one. */
function changePoint(r: Compared, w: Compared, beforeS: number, afterS: number): number {
	const before = perSecond(r, w, beforeS);
	const after = perSecond(r, w, afterS);
	let sum = 0;
	let best = 0;
	let at = 0;
	for (let i = 0; i < before.length; i++) {
		sum += (before[i] === before[i] ? before[i] : 0) - (after[i] === after[i] ? after[i] : 0);
		if (sum > best) {
			best = sum;
			at = i + 1;
		}
	}
	return at;
}

/** Bounded level agreement of every second of the wearable at a shift; 0 where the reference has run out, NaN where either is empty. */
function perSecond(r: Compared, w: Compared, shiftS: number): Float64Array {
	const whole = Math.round(w.startS + shiftS - r.startS);
	return Float64Array.from(w.value, (v, i) => {
		const k = i + whole;
		if (k < 0 || k >= r.value.length) return v === v ? 0 : NaN;
		const e = v - r.value[k];
		return w.scale.levelSq / (w.scale.levelSq + e * e);
	});
}

function mean(values: Float64Array, from: number, to: number): number {
	let sum = 0;
	let n = 0;
	for (let i = from; i < to; i++)
		if (values[i] === values[i]) {
			sum += values[i];
			n++;
		}
	return n > 0 ? sum / n : 1;
}

function within({ tS, value }: Readings, fromS: number, toS: number): Readings {
	let first = 0;
	while (first < tS.length && tS[first] < fromS) first++;
	let end = first;
	while (end < tS.length && tS[end] <= toS) end++;
	return { tS: tS.slice(first, end), value: value.slice(first, end) };
}

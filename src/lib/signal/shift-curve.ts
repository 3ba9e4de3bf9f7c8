/** Correlation against shift, for the offset control: what the eye compares when it nudges. */
import type { Trace } from '../formats/recording';
import { heartRateGrid, type SecondGrid } from './second-grid';
import type { ShiftCurve } from './shift';

/** Fewer common seconds than this give no correlation. */
const LEAST_PAIRS = 30;

/** A trace made ready once, so that a curve can be drawn again at every nudge. */
export type PreparedTrace = SecondGrid;
export const prepareTrace = (trace: Pick<Trace, 'tS' | 'value'>): PreparedTrace => heartRateGrid(trace);

/**
 * Pearson r of the two heart rates where they overlap when the wearable's stamps move by `shiftS`; the reference is
 * read linearly between its seconds.
 * Over both sides' valid seconds alone: masked normalised correlation (Padfield 2012) at this shift.
 * @param leastPairs fewer seconds with a value on both sides give no correlation
 * @returns r NaN when fewer overlap or one side is constant; n seconds compared
 */
export function correlationAtShift(reference: PreparedTrace, wearable: PreparedTrace, shiftS: number, leastPairs = LEAST_PAIRS): { r: number; n: number } {
	const offset = wearable.startS + shiftS - reference.startS;
	const whole = Math.floor(offset);
	const part = offset - whole;
	let n = 0;
	let mx = 0;
	let my = 0;
	let xx = 0;
	let yy = 0;
	let xy = 0;
	const last = Math.min(wearable.value.length, reference.value.length - 1 - whole + (part === 0 ? 1 : 0));
	for (let i = Math.max(0, -whole); i < last; i++) {
		const y = wearable.value[i];
		const x = part === 0 ? reference.value[i + whole] : reference.value[i + whole] * (1 - part) + reference.value[i + whole + 1] * part;
		const d = x + y;
		if (d !== d) continue;
		n++;
		// One-pass moments about the running means (Welford 1962).
		const dx = x - mx;
		const dy = y - my;
		mx += dx / n;
		my += dy / n;
		xx += dx * (x - mx);
		yy += dy * (y - my);
		xy += dx * (y - my);
	}
	return { r: n >= leastPairs && xx > 0 && yy > 0 ? xy / Math.sqrt(xx * yy) : NaN, n };
}

/** The curve from `fromS` to `toS` (both included as far as the step allows). */
export function shiftCurve(reference: PreparedTrace, wearable: PreparedTrace, range: { fromS: number; toS: number; stepS: number }): ShiftCurve {
	const n = Math.max(1, Math.floor((range.toS - range.fromS) / range.stepS + 1e-9) + 1);
	const shiftS = new Float64Array(n);
	const r = new Float64Array(n);
	for (let i = 0; i < n; i++) {
		shiftS[i] = range.fromS + i * range.stepS;
		r[i] = correlationAtShift(reference, wearable, shiftS[i]).r;
	}
	return { shiftS, r };
}

/**
 * Beat intervals whose own time is not in the file: where they are put on the file's clock.
 */
export interface IntervalList {
	/** Time of the beat that ends each interval, epoch seconds, strictly increasing. */
	tS: Float64Array;
	rrMs: Float64Array;
	/** True where the intervals do not add up to the time they span: a value sampled now and then, no list of beats. */
	sampled: boolean;
	/** Number of intervals that had no place of their own (they would stand before the one before them) and are left out. */
	overlapping: number;
	/** What was given, before overlapping intervals were left out. */
	inFile: { n: number; min: number; max: number };
}

/** Where a sum of intervals runs away from the clock by more than this, beats were lost or the clock stood still: a new stretch begins. */
const BREAK_S = 3;
const WINDOW = 20;
/** No calendar reaches further. */
const FURTHEST_S = 8.64e12;

/**
 * Places intervals by the clock of the records that they stand between.
 *
 * The sum of the intervals gives the distance from beat to beat to the millisecond; the records give the clock, to
 * the second. Their difference is constant but for rounding as long as no beat is lost, so its running mean over 41
 * beats (of the middle half of the values, which a lost beat does not move) carries the intervals onto the clock. The result is right to about 1 s as a whole (devices write an
 * interval just before or just after the record it belongs to) and to some 50 ms from beat to beat.
 *
 * @param rrMs intervals in file order, ms; those that are not above 0 and finite are left out
 * @param anchorS clock of the nearest record before (or, at the start, after) each interval, epoch seconds
 * @returns beats in order; `sampled` ones keep the time of their record, one a time stamp
 */
export function placeIntervals(rrMs: number[], anchorS: number[]): IntervalList {
	return place(...usable(rrMs, anchorS));
}

/** Intervals and stamps that are figures; the others are no intervals. */
function usable(rrMs: number[], tS: number[]): [number[], number[]] {
	const sound = (i: number) => rrMs[i] > 0 && rrMs[i] < Infinity && Math.abs(tS[i]) <= FURTHEST_S;
	if (rrMs.every((_, i) => sound(i))) return [rrMs, tS];
	const keep = [...rrMs.keys()].filter(sound);
	return [keep.map((i) => rrMs[i]), keep.map((i) => tS[i])];
}

function place(rrMs: number[], anchorS: number[]): IntervalList {
	const n = rrMs.length;
	let min = Infinity;
	let max = -Infinity;
	for (const rr of rrMs) {
		if (rr < min) min = rr;
		if (rr > max) max = rr;
	}
	const inFile = { n, min, max };
	if (isSampled(rrMs, anchorS)) return { ...keepIncreasing(anchorS, rrMs), sampled: true, inFile };
	const sum = new Float64Array(n);
	const difference = new Float64Array(n);
	let total = 0;
	for (let i = 0; i < n; i++) {
		total += rrMs[i] / 1000;
		sum[i] = total;
		difference[i] = anchorS[i] - total;
	}
	const tS: number[] = new Array(n);
	let begin = 0;
	for (let i = 1; i <= n; i++) {
		const reference = i < n ? median(difference, Math.max(begin, i - 15), i) : 0;
		if (i < n && Math.abs(difference[i] - reference) <= BREAK_S) continue;
		for (let k = begin; k < i; k++)
			tS[k] = sum[k] + middleMean(difference, Math.max(begin, k - WINDOW), Math.min(i, k + WINDOW + 1));
		begin = i;
	}
	return { ...keepIncreasing(tS, rrMs), sampled: false, inFile };
}

/**
 * Intervals that a file stamps one by one. Stamps that follow the intervals to 50 ms in four of five beats are the
 * beats' own and are kept; coarser ones only carry the intervals, as in `placeIntervals`.
 *
 * @param given intervals in file order, ms
 * @param stamps stamp of each, epoch seconds
 */
export function stampedIntervals(given: number[], stamps: number[]): IntervalList {
	const [rrMs, tS] = usable(given, stamps);
	let exact = 0;
	for (let i = 1; i < tS.length; i++) if (Math.abs(tS[i] - tS[i - 1] - rrMs[i] / 1000) <= 0.05) exact++;
	if (exact < 0.8 * (tS.length - 1)) return place(rrMs, tS);
	let min = Infinity;
	let max = -Infinity;
	for (const rr of rrMs) {
		if (rr < min) min = rr;
		if (rr > max) max = rr;
	}
	return { ...keepIncreasing(tS, rrMs), sampled: false, inFile: { n: rrMs.length, min, max } };
}

/** Intervals of beats add up to the time they span; values sampled at a fixed rate do not. Pauses are left out of both. */
function isSampled(rrMs: number[], anchorS: number[]): boolean {
	let sumS = 0;
	let spanS = 0;
	for (let i = 1; i < rrMs.length; i++) {
		const step = anchorS[i] - anchorS[i - 1];
		if (!(step >= 0) || step > 10) continue;
		spanS += step;
		sumS += rrMs[i] / 1000;
	}
	return spanS > 30 && (sumS < 0.85 * spanS || sumS > 1.25 * spanS);
}

function keepIncreasing(tS: number[], rrMs: number[]): { tS: Float64Array; rrMs: Float64Array; overlapping: number } {
	const times: number[] = [];
	const values: number[] = [];
	let last = -Infinity;
	for (let i = 0; i < tS.length; i++) {
		if (!(tS[i] > last)) continue;
		last = tS[i];
		times.push(tS[i]);
		values.push(rrMs[i]);
	}
	return { tS: Float64Array.from(times), rrMs: Float64Array.from(values), overlapping: tS.length - times.length };
}

/** Mean of the middle half. A median would hop between the two values that whole-second rounding gives to an even beat. */
function middleMean(values: Float64Array, from: number, to: number): number {
	const part = values.slice(from, to).sort();
	const cut = part.length >> 2;
	let sum = 0;
	for (let i = cut; i < part.length - cut; i++) sum += part[i];
	return sum / (part.length - 2 * cut);
}

function median(values: Float64Array, from: number, to: number): number {
	const part = values.slice(from, to).sort();
	return part.length % 2 ? part[part.length >> 1] : (part[part.length / 2 - 1] + part[part.length / 2]) / 2;
}

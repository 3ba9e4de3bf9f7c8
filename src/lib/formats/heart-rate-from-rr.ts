/**
 * Heart rate from the intervals between beats, without a lag of its own.
 *
 * A strap's displayed heart rate is an average over the beats before it and so 2 to 3 s late. Here the window is
 * centred: the rate at a time is the number of beats within ±2 s of it, a beat interval that lies half inside
 * counting half, divided by the time that sound intervals cover.
 */
export interface IntervalRate {
	/** Every whole second that is covered well enough, epoch seconds. */
	tS: number[];
	bpm: number[];
	/** Intervals that were left out: too short or long for a beat, or far off their neighbours. */
	dropped: number;
}

const WINDOW_S = 4;
/** An interval outside these bounds is no interval between two neighbouring beats of a moving person. Common practice, no source. */
const SHORTEST_MS = 240;
const LONGEST_MS = 2500;
/** An interval further than this share from the median of its neighbours is an early, extra or missed beat. Common practice, no source. */
const ECTOPIC_SHARE = 0.25;
const NEIGHBOURS = 5;

/**
 * Which intervals are sound: within 240 to 2500 ms, and within 25 % of the median of the eleven around them.
 *
 * @param rrMs intervals in order, ms
 * @returns one flag per interval, 1 = sound
 */
export function soundIntervals(rrMs: ArrayLike<number>): Uint8Array {
	const n = rrMs.length;
	const sound = new Uint8Array(n);
	const near: number[] = [];
	for (let i = 0; i < n; i++) {
		if (!(rrMs[i] >= SHORTEST_MS && rrMs[i] <= LONGEST_MS)) continue;
		near.length = 0;
		for (let j = Math.max(0, i - NEIGHBOURS); j <= Math.min(n - 1, i + NEIGHBOURS); j++)
			if (rrMs[j] >= SHORTEST_MS && rrMs[j] <= LONGEST_MS) near.push(rrMs[j]);
		near.sort((a, b) => a - b);
		const median = near[near.length >> 1];
		if (Math.abs(rrMs[i] - median) <= ECTOPIC_SHARE * median) sound[i] = 1;
	}
	return sound;
}

/**
 * Heart rate at every whole second from beat intervals.
 *
 * @param tS time of the beat that ends each interval, epoch seconds, increasing
 * @param rrMs the intervals, ms; same length
 * @returns heart rate where sound intervals cover at least half of the 4 s window, and how many intervals were left out
 */
export function heartRateFromRr(tS: ArrayLike<number>, rrMs: ArrayLike<number>): IntervalRate {
	const sound = soundIntervals(rrMs);
	const n = tS.length;
	const result: IntervalRate = { tS: [], bpm: [], dropped: 0 };
	for (let i = 0; i < n; i++) if (!sound[i]) result.dropped++;
	let low = 0;
	let lastSecond = -Infinity;
	for (let i = 0; i < n; i++) {
		if (!sound[i]) continue;
		// Seconds that this interval is the first to reach; those before it were reached by earlier intervals.
		const from = Math.max(Math.ceil(tS[i] - rrMs[i] / 1000 - WINDOW_S / 2), lastSecond + 1);
		const to = Math.floor(tS[i] + WINDOW_S / 2);
		for (let second = from; second <= to; second++) {
			const opens = second - WINDOW_S / 2;
			const closes = second + WINDOW_S / 2;
			while (low < n && tS[low] <= opens) low++;
			let beats = 0;
			let covered = 0;
			for (let k = low; k < n; k++) {
				const interval = rrMs[k] / 1000;
				const starts = tS[k] - interval;
				// A long interval may begin before the window although a later, shorter one does not.
				if (starts >= closes && interval < WINDOW_S) break;
				if (!sound[k]) continue;
				const inside = Math.min(closes, tS[k]) - Math.max(opens, starts);
				if (inside <= 0) continue;
				beats += inside / interval;
				covered += inside;
			}
			if (covered >= WINDOW_S / 2) {
				result.tS.push(second);
				result.bpm.push((60 * beats) / covered);
			}
			lastSecond = second;
		}
	}
	return result;
}

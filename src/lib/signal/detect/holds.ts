/** Holds: one value frozen while the heart moves. */
import type { Trace } from '../../formats/recording';
import type { CommonSeconds } from './common-seconds';
import { asScore, rising, type Proposal } from './proposal';
import type { Region } from './regions';
import { duration, whole } from './words';

const SHORTEST_S = 12;
/** The reference must have moved by this much meanwhile, bpm, and by this much for every second of the hold. */
const LEAST_MOVE_BPM = 4;
const MOVE_BPM_PER_S = 0.06;
/** The value must stand this far off at some time, bpm; less where it is long: steady work does not stand on one whole number for a minute. */
const OFF_BPM = 4.5;
const LONG_OFF_BPM = 3;
const LONG_S = 60;
/** At its start the value is right within this, or it leaps by as much when it comes free, bpm. */
const START_BPM = 6;
/** Readings further apart than this break a hold, s. */
const LONGEST_STEP_S = 10;

export interface Hold extends Region {
	proposal: Proposal;
}

/** @param trace the wearable's readings, as they are in the file */
export function holds(trace: Pick<Trace, 'tS' | 'value'>, common: CommonSeconds): Hold[] {
	const { tS, value } = trace;
	const found: Hold[] = [];
	let first = 0;
	for (let i = 1; i <= tS.length; i++) {
		if (i < tS.length && value[i] === value[first] && tS[i] - tS[i - 1] <= LONGEST_STEP_S) continue;
		const lengthS = tS[i - 1] - tS[first] + 1;
		if (lengthS >= SHORTEST_S) {
			const next = i < tS.length && tS[i] - tS[i - 1] <= LONGEST_STEP_S ? value[i] : NaN;
			const hold = judged(common, value[first], tS[first], tS[i - 1] + 1, next);
			if (hold) found.push(hold);
		}
		first = i;
	}
	return found;
}

function judged(common: CommonSeconds, level: number, startS: number, endS: number, next: number): Hold | null {
	const from = Math.max(0, Math.round(startS) - common.startS);
	const to = Math.min(common.length, Math.round(endS) - common.startS);
	let low = Infinity;
	let high = -Infinity;
	let off = 0;
	let first = NaN;
	for (let i = from; i < to; i++) {
		const e = common.expected[i];
		if (Number.isNaN(e)) continue;
		if (Number.isNaN(first)) first = e;
		if (e < low) low = e;
		if (e > high) high = e;
		off = Math.max(off, Math.abs(e - level));
	}
	const lengthS = endS - startS;
	const move = high - low;
	if (!(move >= Math.max(LEAST_MOVE_BPM, MOVE_BPM_PER_S * Math.min(lengthS, LONG_S)))) return null;
	const leap = Math.abs(next - level) || 0;
	if (off < (lengthS < LONG_S ? OFF_BPM : LONG_OFF_BPM)) return null;
	// A hold bridges a bad signal with the last good value. One that is wrong from its first second is a level of another fault.
	if (Math.abs(level - first) > START_BPM && leap < START_BPM) return null;
	return {
		from,
		to,
		proposal: {
			kind: 'hold',
			on: 'wearable',
			startS,
			endS,
			score: asScore(0.25 + 0.25 * rising(lengthS, SHORTEST_S, 10) + 0.3 * rising(off, 2, 4) + 0.2 * rising(leap, 1, 4)),
			evidence: `Stays at ${whole(level)} bpm for ${duration(lengthS)} while the reference moves between ${whole(low)} and ${whole(high)}.`
		}
	};
}

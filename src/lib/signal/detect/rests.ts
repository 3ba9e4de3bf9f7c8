/** Rests: breaks in the exercise, by movement where it was recorded, else by the fall of the heart rate. */
import type { Trace } from '../../formats/recording';
import { centredMean } from '../slopes';
import type { CommonSeconds } from './common-seconds';
import { prominentPeaks } from './peak-prominence';
import { asScore, rising, type Proposal } from './proposal';
import { runsOf } from './regions';
import { duration, whole } from './words';

const STILL_CADENCE_PER_MIN = 20;
const STILL_SPEED_M_S = 1;
const SHORTEST_S = 12;
/** Seconds of movement that do not end a rest. */
const BRIDGE_S = 3;
/** A peak of the heart rate this prominent ends an effort, bpm, where no movement was recorded. */
const EFFORT_BPM = 8;
const SMOOTHING_HALF_S = 3;
/** A reading speaks for at most this long, s. */
const LONGEST_STEP_S = 10;
/** Longest session looked at, s; beyond it a file holds a wrong date. */
const LONGEST_S = 4 * 86_400;
/** Longest fall after an effort that still counts as its rest, s. */
const LONGEST_FALL_S = 600;

/**
 * @param movement cadence and speed with a map from the reference's clock to theirs; a missing reading means standing,
 * as in files, where a cadence of 0 is no reading
 */
export function rests(common: CommonSeconds, movement: { cadence?: Pick<Trace, 'tS' | 'value'>; speed?: Pick<Trace, 'tS' | 'value'>; fromReferenceS: (s: number) => number }): Proposal[] {
	return movement.cadence && movement.cadence.tS.length > 1 ? standing(common, movement.cadence, movement.speed, movement.fromReferenceS) : falls(common);
}

function standing({ strap }: CommonSeconds, cadence: Pick<Trace, 'tS' | 'value'>, speed: Pick<Trace, 'tS' | 'value'> | undefined, fromReferenceS: (s: number) => number): Proposal[] {
	const turning = movingSeconds(cadence, STILL_CADENCE_PER_MIN);
	const going = speed ? movingSeconds(speed, STILL_SPEED_M_S) : null;
	const still = (i: number) => {
		const at = Math.round(fromReferenceS(strap.startS + i));
		return !turning.has(at) && !going?.has(at);
	};
	const found: Proposal[] = [];
	for (const run of runsOf(strap.value.length, still, BRIDGE_S)) {
		const lengthS = run.to - run.from;
		if (lengthS < SHORTEST_S) continue;
		const before = strap.value[run.from];
		let low = Infinity;
		for (let i = run.from; i < run.to; i++) if (strap.value[i] < low && !strap.unsound[i]) low = strap.value[i];
		const fell = before - low;
		found.push({
			kind: 'rest',
			on: 'reference',
			startS: strap.startS + run.from,
			endS: strap.startS + run.to,
			score: asScore(0.6 + 0.2 * rising(lengthS, SHORTEST_S, 20) + 0.2 * (fell > 0 ? rising(fell, 0, 10) : 0)),
			evidence: `No movement for ${duration(lengthS)}` + (fell >= 4 ? `; heart rate falls from ${whole(before)} to ${whole(low)}.` : '.')
		});
	}
	return found;
}

/**
 * Whole seconds with movement. A reading speaks for the seconds up to the next one, for as long as the device's own
 * rhythm says: a stop of a few seconds must not be drawn over.
 */
function movingSeconds({ tS, value }: Pick<Trace, 'tS' | 'value'>, least: number): { has: (second: number) => boolean } {
	const firstS = Math.floor(tS[0]);
	const moving = new Uint8Array(Math.max(1, Math.min(LONGEST_S, Math.ceil(tS[tS.length - 1]) - firstS + LONGEST_STEP_S + 1)));
	const steps = new Float64Array(Math.max(1, tS.length - 1)).fill(1);
	for (let i = 0; i + 1 < tS.length; i++) steps[i] = tS[i + 1] - tS[i];
	const rhythmS = Math.min(LONGEST_STEP_S, Math.max(1, steps.sort()[Math.floor(0.95 * (steps.length - 1))]));
	for (let i = 0; i < tS.length; i++) {
		if (value[i] < least) continue;
		const until = Math.min(tS[i] + rhythmS, tS[i + 1] ?? Infinity);
		for (let s = Math.round(tS[i]); s < until; s++) if (s - firstS < moving.length) moving[s - firstS] = 1;
	}
	return { has: (second) => moving[second - firstS] === 1 };
}

/** From the peak at the end of an effort to the lowest point before the next. */
function falls({ strap }: CommonSeconds): Proposal[] {
	const sound = strap.value.slice();
	for (let i = 0; i < sound.length; i++) if (strap.unsound[i]) sound[i] = NaN;
	const smooth = centredMean(sound, SMOOTHING_HALF_S);
	const peaks = prominentPeaks(smooth, EFFORT_BPM);
	return peaks.flatMap((peak, k): Proposal[] => {
		const end = Math.min(peaks[k + 1]?.at ?? smooth.length, peak.at + LONGEST_FALL_S);
		let low = peak.at;
		for (let i = peak.at + 1; i < end; i++) if (smooth[i] < smooth[low]) low = i;
		const lengthS = low - peak.at;
		const fell = peak.height - smooth[low];
		if (lengthS < SHORTEST_S || fell < EFFORT_BPM) return [];
		return [
			{
				kind: 'rest',
				on: 'reference',
				startS: strap.startS + peak.at,
				endS: strap.startS + low,
				score: asScore(0.3 + 0.4 * rising(fell, EFFORT_BPM, 12)),
				evidence: `Heart rate falls from ${whole(peak.height)} to ${whole(smooth[low])} in ${duration(lengthS)}; no movement was recorded to tell more.`
			}
		];
	});
}

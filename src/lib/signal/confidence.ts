/**
 * How sure a shift is: blocks of one minute are drawn again and again, and every time the shift is estimated and the
 * other candidates compete. Seconds within a block stay together, since they are not independent.
 */
import { randomBits } from './random-bits';
import { blockAgreement, compared, levelAgreement, type Compared } from './disagreement';
import type { Refined } from './response-bank';
import { NO_SMOOTHER } from './smoothers';

export interface Confidence {
	/** Share of resamples in which the best candidate beats all others. */
	win: number;
	/** Half the middle 68 % of the re-estimated shift, s. */
	standardErrorS: number;
	/** Width of the middle 90 % of the re-estimated shift, s. */
	spread90S: number;
	/** Mean bounded agreement of levels at the best shift × overlap share, 0 to 1. */
	agreement: number;
	/** Seconds of the wearable that overlap the reference's readings at the best shift. */
	overlapS: number;
}

const BLOCK_S = 60;
const RESAMPLES = 300;
const NEAR_STEP_S = 0.25;
const NEAR_STEPS = 12;

/**
 * @param bare the reference as recorded
 * @param w the wearable
 * @param candidatesS refined shifts with the bare reference, best first; the first belongs to `refined`
 * @param leastValidS seconds with a value of the side that has fewer
 * @param every look at one second in this many only
 */
export function confidenceOf(bare: Compared, w: Compared, refined: Refined, candidatesS: number[], leastValidS: number, every = 1): Confidence {
	const own = refined.smoother === NO_SMOOTHER ? bare : compared(bare.startS, refined.smoother.apply(bare.value));
	const nearS = Array.from({ length: 2 * NEAR_STEPS + 1 }, (_, k) => refined.throughSmootherS + (k - NEAR_STEPS) * NEAR_STEP_S);
	const near = blockAgreement(own, w, nearS, BLOCK_S, every);
	const rivals = blockAgreement(bare, w, candidatesS, BLOCK_S, every);

	const random = randomBits(20_250_101);
	const estimates = new Float64Array(RESAMPLES);
	let wins = 0;
	const nearSum = new Float64Array(near.shifts);
	const nearCount = new Float64Array(near.shifts);
	const rivalSum = new Float64Array(rivals.shifts);
	for (let b = 0; b < RESAMPLES; b++) {
		nearSum.fill(0);
		nearCount.fill(0);
		rivalSum.fill(0);
		for (let k = 0; k < near.blocks; k++) {
			const block = Math.floor(random() * near.blocks);
			for (let s = 0, at = block * near.shifts; s < near.shifts; s++, at++) {
				nearSum[s] += near.sum[at];
				nearCount[s] += near.count[at];
			}
			for (let s = 0, at = block * rivals.shifts; s < rivals.shifts; s++, at++) rivalSum[s] += rivals.sum[at];
		}
		let best = 0;
		for (let s = 1; s < near.shifts; s++) if (meanOf(nearSum[s], nearCount[s]) > meanOf(nearSum[best], nearCount[best])) best = s;
		estimates[b] = nearS[best] + vertex(nearSum, nearCount, best) * NEAR_STEP_S;
		let won = true;
		for (let s = 1; s < rivals.shifts; s++) if (rivalSum[s] >= rivalSum[0]) won = false;
		if (won) wins++;
	}
	estimates.sort();
	const at = (share: number) => estimates[Math.min(RESAMPLES - 1, Math.round(share * (RESAMPLES - 1)))];

	const overlap = levelAgreement(bare, w, candidatesS[0] ?? refined.plainS);
	return {
		win: wins / RESAMPLES,
		standardErrorS: (at(0.84) - at(0.16)) / 2,
		spread90S: at(0.95) - at(0.05),
		agreement: overlap.mean * Math.min(1, overlap.n / Math.max(1, leastValidS)),
		overlapS: overlap.n
	};
}

const meanOf = (sum: number, count: number) => (count > 0 ? sum / count : -Infinity);

/** Where a parabola through the best point and its neighbours stands highest, in steps from the best one. */
function vertex(sum: Float64Array, count: Float64Array, best: number): number {
	if (best === 0 || best === sum.length - 1) return 0;
	const [a, b, c] = [best - 1, best, best + 1].map((k) => meanOf(sum[k], count[k]));
	const curve = a - 2 * b + c;
	return curve < 0 ? Math.max(-0.5, Math.min(0.5, (0.5 * (a - c)) / curve)) : 0;
}

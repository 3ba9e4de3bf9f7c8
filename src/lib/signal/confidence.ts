/**
 * How sure a shift is: blocks of one minute are drawn again and again, and every time the shift is estimated and the
 * other candidates compete. Seconds within a block stay together, since they are not independent.
 */
import { randomBits } from './random-bits';
import { compared, disagreement, NO_SMOOTHER, type Compared, type Refined } from './response-bank';
import type { SecondGrid } from './second-grid';

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

/** Sums of bounded agreement of one block at one shift, and the seconds that it rests on. */
interface BlockSums {
	/** blocks × shifts */
	sum: Float64Array;
	count: Float64Array;
	blocks: number;
	shifts: number;
}

/**
 * @param candidates refined shifts with the bare reference, best first; the first belongs to `refined`
 */
export function confidenceOf(reference: SecondGrid, wearable: SecondGrid, refined: Refined, candidatesS: number[]): Confidence {
	const w = compared(wearable.startS, wearable.value);
	const bare = compared(reference.startS, reference.value);
	const own = refined.smoother === NO_SMOOTHER ? bare : compared(reference.startS, refined.smoother.apply(reference.value));
	const ownShiftS = refined.totalS + refined.smoother.delayS;

	const nearS = Array.from({ length: 2 * NEAR_STEPS + 1 }, (_, k) => ownShiftS + (k - NEAR_STEPS) * NEAR_STEP_S);
	const near = blockSums(own, w, nearS);
	const rivals = blockSums(bare, w, candidatesS);

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
	const least = Math.max(1, Math.min(reference.valid, wearable.valid));
	return {
		win: wins / RESAMPLES,
		standardErrorS: (at(0.84) - at(0.16)) / 2,
		spread90S: at(0.95) - at(0.05),
		agreement: overlap.mean * Math.min(1, overlap.n / least),
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

/** Bounded agreement (level and slope) per block of the wearable's minutes and per shift. */
function blockSums(reference: Compared, wearable: Compared, shiftsS: number[]): BlockSums {
	const blocks = Math.max(1, Math.ceil(wearable.value.length / BLOCK_S));
	const shifts = shiftsS.length;
	const sum = new Float64Array(blocks * shifts);
	const count = new Float64Array(blocks * shifts);
	for (let s = 0; s < shifts; s++) {
		const offset = wearable.startS + shiftsS[s] - reference.startS;
		const whole = Math.floor(offset);
		const part = offset - whole;
		const first = Math.max(0, -whole);
		const last = Math.min(wearable.value.length, reference.value.length - 1 - whole);
		for (let i = first; i < last; i++) {
			const k = i + whole;
			const e = wearable.value[i] - (reference.value[k] * (1 - part) + reference.value[k + 1] * part);
			if (e !== e) continue;
			const at = Math.floor(i / BLOCK_S) * shifts + s;
			const g = wearable.slope[i] - (reference.slope[k] * (1 - part) + reference.slope[k + 1] * part);
			sum[at] += 49 / (e * e + 49) + (g === g ? 25 / (g * g + 25) : 0.5);
			count[at]++;
		}
	}
	return { sum, count, blocks, shifts };
}

/** Mean of 49 / (49 + e²) over the seconds that can be compared: 1 = the same, 0.5 = 7 bpm apart. */
function levelAgreement(reference: Compared, wearable: Compared, shiftS: number): { mean: number; n: number } {
	const loss = { sum: 0, n: 0 };
	const offset = wearable.startS + shiftS - reference.startS;
	const whole = Math.round(offset);
	for (let i = Math.max(0, -whole); i < Math.min(wearable.value.length, reference.value.length - whole); i++) {
		const e = wearable.value[i] - reference.value[i + whole];
		if (e !== e) continue;
		loss.sum += 49 / (e * e + 49);
		loss.n++;
	}
	return { mean: loss.n > 0 ? loss.sum / loss.n : 0, n: loss.n };
}

/** The candidate refined against the bare reference: where its agreement is highest within ±4 s. */
export function settleCandidate(reference: SecondGrid, wearable: SecondGrid, coarseS: number): number {
	const r = compared(reference.startS, reference.value);
	const w = compared(wearable.startS, wearable.value);
	let best = coarseS;
	let loss = Infinity;
	for (let s = Math.round(coarseS) - 4; s <= Math.round(coarseS) + 4; s++) {
		const l = disagreement(r, w, s);
		if (l < loss) {
			loss = l;
			best = s;
		}
	}
	return best;
}

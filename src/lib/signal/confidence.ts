/**
 * How sure a shift is: blocks of one minute are drawn again and again (block bootstrap, Künsch 1989), and every time
 * the shift is estimated anew, the choice of smoother included, and the other candidates compete. Seconds within a
 * block stay together, since they are not independent.
 */
import { blockAgreement, levelAgreement, type BlockSums, type Compared } from './disagreement';
import { randomBits } from './random-bits';
import { totalOf, type Refined } from './response-bank';

export interface Confidence {
	/** Share of resamples in which the best candidate beats all others. */
	win: number;
	/** Mean of the re-estimated total shift, s: steadier than the estimate itself where the smoother is hard to tell. */
	meanS: number;
	/** Half the middle 68 % of the re-estimated total shift, s. */
	standardErrorS: number;
	/** Width of the middle 90 % of the re-estimated total shift, s. */
	spread90S: number;
	/** Mean bounded agreement of levels at the best shift × overlap share, 0 to 1. */
	agreement: number;
	/** Seconds of the wearable that overlap the reference's readings at the best shift. */
	overlapS: number;
}

const BLOCK_S = 60;
const RESAMPLES = 300;
/** The three shifts of every smoother through which a parabola is laid stand this far apart, s. */
const PROBE_S = 1.5;
/** A resample's shift is looked for this far from the whole session's, s. */
const FARTHEST_S = 4;

/**
 * @param bare the reference as recorded
 * @param w the wearable
 * @param candidatesS refined shifts with the bare reference, best first; the first belongs to `refined`
 * @param leastValidS seconds with a value of the side that has fewer
 * @param every look at one second in this many only
 */
export function confidenceOf(bare: Compared, w: Compared, refined: Refined, candidatesS: number[], leastValidS: number, every = 1): Confidence {
	const members = refined.fits.map((fit) => blockAgreement(fit.reference, w, [fit.shiftS - PROBE_S, fit.shiftS, fit.shiftS + PROBE_S], BLOCK_S, every));
	const rivals = blockAgreement(bare, w, candidatesS, BLOCK_S, every);

	const random = randomBits(20_250_101);
	const drawn = new Uint32Array(rivals.blocks);
	const totals = new Float64Array(RESAMPLES);
	const shifts = new Float64Array(members.length);
	const losses = new Float64Array(members.length);
	let wins = 0;
	for (let b = 0; b < RESAMPLES; b++) {
		for (let k = 0; k < drawn.length; k++) drawn[k] = Math.floor(random() * drawn.length);
		let best = 0;
		for (let m = 0; m < members.length; m++) {
			const { atS, agreement } = peak(members[m], drawn);
			shifts[m] = refined.fits[m].shiftS + atS;
			losses[m] = -agreement;
			if (losses[m] < losses[best]) best = m;
		}
		totals[b] = totalOf(best, shifts, losses);
		if (firstWins(rivals, drawn)) wins++;
	}
	const meanS = totals.reduce((a, c) => a + c, 0) / RESAMPLES;
	totals.sort();
	const at = (share: number) => totals[Math.min(RESAMPLES - 1, Math.round(share * (RESAMPLES - 1)))];

	const overlap = levelAgreement(bare, w, candidatesS[0] ?? refined.plainS);
	return {
		win: wins / RESAMPLES,
		meanS,
		standardErrorS: (at(0.84) - at(0.16)) / 2,
		spread90S: at(0.95) - at(0.05),
		agreement: overlap.mean * Math.min(1, overlap.n / Math.max(1, leastValidS)),
		overlapS: overlap.n
	};
}

/** Highest point of the parabola through the three probed shifts over the drawn blocks: s from the middle, and its height. */
function peak(sums: BlockSums, drawn: Uint32Array): { atS: number; agreement: number } {
	const { sum, count } = sums;
	let a = 0;
	let b = 0;
	let c = 0;
	let na = 0;
	let nb = 0;
	let nc = 0;
	for (let k = 0; k < drawn.length; k++) {
		const at = 3 * drawn[k];
		a += sum[at];
		b += sum[at + 1];
		c += sum[at + 2];
		na += count[at];
		nb += count[at + 1];
		nc += count[at + 2];
	}
	if (na === 0 || nb === 0 || nc === 0) return { atS: 0, agreement: 0 };
	const [before, here, after] = [a / na, b / nb, c / nc];
	const curve = before - 2 * here + after;
	if (!(curve < 0)) return { atS: after > before ? FARTHEST_S : -FARTHEST_S, agreement: Math.max(before, after) };
	const steps = (0.5 * (before - after)) / curve;
	const atS = Math.max(-FARTHEST_S, Math.min(FARTHEST_S, steps * PROBE_S));
	const u = atS / PROBE_S;
	return { atS, agreement: here + ((after - before) / 2) * u + (curve / 2) * u * u };
}

/** Whether the first candidate agrees more than every other over the drawn blocks. */
function firstWins(rivals: BlockSums, drawn: Uint32Array): boolean {
	const totals = new Float64Array(rivals.shifts);
	for (let k = 0; k < drawn.length; k++)
		for (let s = 0, at = drawn[k] * rivals.shifts; s < rivals.shifts; s++, at++) totals[s] += rivals.sum[at];
	for (let s = 1; s < rivals.shifts; s++) if (totals[s] >= totals[0]) return false;
	return true;
}

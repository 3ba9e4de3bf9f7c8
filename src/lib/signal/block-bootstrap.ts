/**
 * Block bootstrap (Künsch 1989) of a shift: blocks of the wearable are drawn again and again, and every time the shift
 * is estimated anew. Seconds within a block stay together, since they are not independent.
 */
import type { BlockSums } from './disagreement';
import { randomBits } from './random-bits';

const BLOCK_S = 60;
/** Longer recordings are cut into longer blocks: more of them take time and tell no more. */
const MOST_BLOCKS = 240;

/** Length of the blocks of a recording of so many seconds, s. */
export const blockLengthS = (lengthS: number) => Math.max(BLOCK_S, Math.ceil(lengthS / MOST_BLOCKS));
/** The three shifts through which a parabola is laid stand this far apart, s. */
export const PROBE_S = 1.5;
const RESAMPLES = 300;
/** A resample's shift is looked for this far from the whole session's, s. */
const FARTHEST_S = 4;
const SEED = 20_250_101;

export interface ResampledShift {
	/** Mean of the re-estimated shift, s. */
	meanS: number;
	/** Half its middle 68 %, s. */
	standardErrorS: number;
	/** Width of its middle 90 %, s. */
	spread90S: number;
}

/**
 * @param members block sums of every way to explain the wearable, each at three shifts: its own less PROBE_S, its own, its own and PROBE_S
 * @param shiftsS each member's own shift, s
 * @param totalOf the shift that is wanted, from the best member, all members' re-estimated shifts and their losses
 */
export function resampleShift(members: BlockSums[], shiftsS: number[], totalOf: (best: number, shiftsS: Float64Array, losses: Float64Array) => number): ResampledShift {
	const random = randomBits(SEED);
	const drawn = new Uint32Array(members[0].blocks);
	const totals = new Float64Array(RESAMPLES);
	const shifts = new Float64Array(members.length);
	const losses = new Float64Array(members.length);
	for (let b = 0; b < RESAMPLES; b++) {
		draw(drawn, random);
		let best = 0;
		for (let m = 0; m < members.length; m++) {
			const { atS, agreement } = peak(members[m], drawn);
			shifts[m] = shiftsS[m] + atS;
			losses[m] = -agreement;
			if (losses[m] < losses[best]) best = m;
		}
		totals[b] = totalOf(best, shifts, losses);
	}
	const meanS = totals.reduce((a, c) => a + c, 0) / RESAMPLES;
	totals.sort();
	const at = (share: number) => totals[Math.min(RESAMPLES - 1, Math.round(share * (RESAMPLES - 1)))];
	return { meanS, standardErrorS: (at(0.84) - at(0.16)) / 2, spread90S: at(0.95) - at(0.05) };
}

/** A rival that overlaps less than this share of what the first does cannot be judged by its own overlap alone. */
const RIVAL_OVERLAP = 0.7;

/**
 * Share of resamples in which the first shift agrees more than every other; 1 when it has no rival.
 *
 * A rival is met on the blocks that it overlaps, so that a session of like repeats, which matches itself one repeat on,
 * is not won by the longer overlap alone; a rival of little overlap is met on all.
 */
export function winShare(rivals: BlockSums): number {
	const { sum, count, blocks, shifts } = rivals;
	const seconds = new Float64Array(shifts);
	for (let block = 0; block < blocks; block++) for (let s = 0; s < shifts; s++) seconds[s] += count[block * shifts + s];
	// How far the first is ahead of each rival, block by block.
	const ahead = new Float64Array(blocks * shifts);
	for (let block = 0; block < blocks; block++) {
		const first = block * shifts;
		for (let s = 1; s < shifts; s++) {
			const met = seconds[s] < RIVAL_OVERLAP * seconds[0] || count[first] === 0 ? 1 : Math.min(1, count[first + s] / count[first]);
			ahead[first + s] = sum[first] * met - sum[first + s];
		}
	}
	const random = randomBits(SEED);
	const drawn = new Uint32Array(blocks);
	const totals = new Float64Array(shifts);
	let wins = 0;
	for (let b = 0; b < RESAMPLES; b++) {
		draw(drawn, random);
		totals.fill(0);
		for (let k = 0; k < drawn.length; k++) for (let s = 1, at = drawn[k] * shifts + 1; s < shifts; s++, at++) totals[s] += ahead[at];
		let won = true;
		// Rounding alone wins nothing.
		for (let s = 1; s < shifts; s++) if (totals[s] <= 1e-9 * seconds[0]) won = false;
		if (won) wins++;
	}
	return wins / RESAMPLES;
}

function draw(drawn: Uint32Array, random: () => number): void {
	for (let k = 0; k < drawn.length; k++) drawn[k] = Math.floor(random() * drawn.length);
}

/** Highest point of the parabola through the three probed shifts over the drawn blocks: s from the middle, and its height. */
function peak({ sum, count }: BlockSums, drawn: Uint32Array): { atS: number; agreement: number } {
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
	const atS = Math.max(-FARTHEST_S, Math.min(FARTHEST_S, (0.5 * PROBE_S * (before - after)) / curve));
	const u = atS / PROBE_S;
	return { atS, agreement: here + ((after - before) / 2) * u + (curve / 2) * u * u };
}

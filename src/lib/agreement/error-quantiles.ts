/** The size of error that a given share of readings stays below: median and 95th percentile of |d|. */
import { notDeterminable, type Figure } from './determinable';
import { ERROR_BIN_BPM, ERROR_BINS, type PairSums } from './sums';

/** Pairs in columns. */
export interface PairColumns {
	reference: Float64Array;
	wearable: Float64Array;
}

/**
 * Exact quantiles of |wearable − reference| over several groups of pairs, without putting them in one array: the
 * counts by size name the bin that holds the quantile, and only that bin's readings are looked at.
 *
 * @param groups pairs, bpm
 * @param sums the sums of all these pairs together
 * @param probabilities 0 to 1 each
 * @returns one quantile a probability, interpolated linearly between neighbouring readings (type 7 of Hyndman RJ,
 *   Fan Y 1996, The American Statistician 50:361-365)
 */
export function exactErrorQuantiles(
	groups: readonly PairColumns[],
	sums: PairSums,
	probabilities: readonly number[]
): Figure[] {
	if (sums.n === 0) return probabilities.map(() => notDeterminable('There are no pairs.'));
	const ranks = new Set<number>();
	for (const p of probabilities) {
		ranks.add(Math.floor(p * (sums.n - 1)));
		ranks.add(Math.ceil(p * (sums.n - 1)));
	}
	const byRank = readingsAtRanks(
		groups,
		sums,
		[...ranks].sort((a, b) => a - b)
	);
	return probabilities.map((p) => {
		const at = p * (sums.n - 1);
		const low = byRank.get(Math.floor(at)) ?? NaN;
		const high = byRank.get(Math.ceil(at)) ?? NaN;
		return low + (high - low) * (at - Math.floor(at));
	});
}

function readingsAtRanks(
	groups: readonly PairColumns[],
	sums: PairSums,
	ranks: readonly number[]
): Map<number, number> {
	// Rank -> bin and how many stand in the bins before it.
	const wanted = new Map<number, { before: number; ranks: number[] }>();
	let bin = 0;
	let before = 0;
	for (const rank of ranks) {
		while (before + sums.errorBins[bin] <= rank) before += sums.errorBins[bin++];
		const entry = wanted.get(bin);
		if (entry) entry.ranks.push(rank);
		else wanted.set(bin, { before, ranks: [rank] });
	}
	const slotOfBin = new Int32Array(ERROR_BINS).fill(-1);
	const slots = [...wanted].map(([b, { before: count, ranks: inBin }], slot) => {
		slotOfBin[b] = slot;
		return { before: count, ranks: inBin, readings: new Float64Array(sums.errorBins[b]), filled: 0 };
	});
	for (const { reference, wearable } of groups) {
		for (let i = 0; i < reference.length; i++) {
			const error = Math.abs(wearable[i] - reference[i]);
			const b = error / ERROR_BIN_BPM;
			const slot = slotOfBin[b < ERROR_BINS - 1 ? b | 0 : ERROR_BINS - 1];
			if (slot >= 0) slots[slot].readings[slots[slot].filled++] = error;
		}
	}
	const found = new Map<number, number>();
	for (const slot of slots) for (const rank of slot.ranks) found.set(rank, select(slot.readings, rank - slot.before));
	return found;
}

/** The k-th smallest (from 0); reorders the array. Floyd RW, Rivest RL (1975) Algorithm 489, without its sampling. */
function select(values: Float64Array, k: number): number {
	let low = 0;
	let high = values.length - 1;
	while (low < high) {
		const middle = (low + high) >>> 1;
		const [a, b, c] = [values[low], values[middle], values[high]];
		const pivot = Math.max(Math.min(a, b), Math.min(Math.max(a, b), c));
		let i = low;
		let j = high;
		while (i <= j) {
			while (values[i] < pivot) i++;
			while (values[j] > pivot) j--;
			if (i <= j) {
				const swap = values[i];
				values[i++] = values[j];
				values[j--] = swap;
			}
		}
		if (k <= j) high = j;
		else if (k >= i) low = i;
		else return pivot;
	}
	return values[k];
}

/** Quantile of |d| from the counts alone, to within one bin (0.125 bpm): for records whose readings are elsewhere. */
export function binnedErrorQuantile(sums: Pick<PairSums, 'n' | 'errorBins'>, probability: number): Figure {
	if (sums.n === 0) return notDeterminable('There are no pairs.');
	const rank = probability * (sums.n - 1);
	let before = 0;
	for (let bin = 0; bin < ERROR_BINS; bin++) {
		const count = sums.errorBins[bin];
		if (before + count > rank) {
			if (bin === ERROR_BINS - 1) return notDeterminable(`The error is above ${(ERROR_BINS - 1) * ERROR_BIN_BPM} bpm.`);
			return (bin + (rank - before + 0.5) / count) * ERROR_BIN_BPM;
		}
		before += count;
	}
	return notDeterminable('There are no pairs.');
}

/** Pairs of epochs above one second: means over the seconds that count. */
import type { UncountedTable } from './pair-table';

/**
 * Average pairs over epochs that start at multiples of their length on the reference's clock.
 *
 * Only seconds of the primary analysis go into a mean, so that a reference fault cannot. An epoch needs at least half
 * of its seconds. It leaves the cleaned analysis when one of these seconds does: a mean that mixes in a left-out
 * second is not clean. Longer epochs shrink errors and hide lag; state the epoch beside the figures.
 *
 * @param perSecond pairs on whole seconds, both values present
 * @param gridS length of the epoch, whole seconds above 1
 * @returns one row an epoch, `tS` its start; tags are those of any of its seconds that went in
 */
export function epochPairs(perSecond: UncountedTable, gridS: number): UncountedTable {
	const rows: {
		tS: number;
		reference: number;
		wearable: number;
		inCleaned: number;
		referenceTags: number;
		wearableTags: number;
	}[] = [];
	let i = 0;
	while (i < perSecond.n) {
		const startS = Math.floor(perSecond.tS[i] / gridS) * gridS;
		let count = 0;
		let reference = 0;
		let wearable = 0;
		let inCleaned = 1;
		let referenceTags = 0;
		let wearableTags = 0;
		for (; i < perSecond.n && perSecond.tS[i] < startS + gridS; i++) {
			if (!perSecond.inPrimary[i]) continue;
			count++;
			reference += perSecond.reference[i];
			wearable += perSecond.wearable[i];
			if (!perSecond.inCleaned[i]) inCleaned = 0;
			referenceTags |= perSecond.referenceTags[i];
			wearableTags |= perSecond.wearableTags[i];
		}
		if (count * 2 >= gridS)
			rows.push({
				tS: startS,
				reference: reference / count,
				wearable: wearable / count,
				inCleaned,
				referenceTags,
				wearableTags
			});
	}
	return {
		n: rows.length,
		tS: Float64Array.from(rows, (r) => r.tS),
		reference: Float64Array.from(rows, (r) => r.reference),
		wearable: Float64Array.from(rows, (r) => r.wearable),
		inPrimary: new Uint8Array(rows.length).fill(1),
		inCleaned: Uint8Array.from(rows, (r) => r.inCleaned),
		referenceTags: Uint32Array.from(rows, (r) => r.referenceTags),
		wearableTags: Uint32Array.from(rows, (r) => r.wearableTags)
	};
}

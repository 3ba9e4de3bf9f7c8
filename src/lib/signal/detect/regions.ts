/** Stretches where the wearable stands outside of what the reference allows. */

/** Seconds [from, to). */
export interface Region {
	from: number;
	to: number;
}

/** A region needs a second further outside than this, bpm ... */
const SEED_BPM = 7;
/** ... and grows while further outside than this. */
export const GROW_BPM = 4;
/** Seconds back inside that do not end it. */
const BRIDGE_S = 6;

/** @param read 1 at seconds with a reading: what is bridged between readings makes no region longer */
export function disagreeingRegions(excess: Float64Array, read: Uint8Array): Region[] {
	const regions: Region[] = [];
	let from = -1;
	let last = -1;
	let seeded = false;
	const close = () => {
		if (from >= 0 && seeded) {
			let a = from;
			let b = last;
			while (a < b && !read[a]) a++;
			while (b > a && !read[b]) b--;
			regions.push({ from: a, to: b + 1 });
		}
		from = -1;
		seeded = false;
	};
	for (let i = 0; i < excess.length; i++) {
		const size = Math.abs(excess[i]);
		if (size > GROW_BPM) {
			if (from >= 0 && i - last > BRIDGE_S + 1) close();
			if (from < 0) from = i;
			last = i;
			if (size > SEED_BPM) seeded = true;
		}
	}
	close();
	return regions;
}

/** Runs of seconds where `holds`, over breaks of at most `bridge` seconds. */
export function runsOf(length: number, holds: (i: number) => boolean, bridge: number): Region[] {
	const runs: Region[] = [];
	for (let i = 0; i < length; i++) {
		if (!holds(i)) continue;
		const last = runs[runs.length - 1];
		if (last && i - last.to <= bridge) last.to = i + 1;
		else runs.push({ from: i, to: i + 1 });
	}
	return runs;
}

export const overlapOf = (a: Region, b: Region): number => Math.max(0, Math.min(a.to, b.to) - Math.max(a.from, b.from));

/** Share of the region that the others cover; they must not overlap each other. */
export function coveredShare(region: Region, others: readonly Region[]): number {
	let sum = 0;
	for (const other of others) sum += overlapOf(region, other);
	return sum / Math.max(1, region.to - region.from);
}

export function medianOf(values: Iterable<number>): number {
	const sorted = Float64Array.from(values).filter((v) => !Number.isNaN(v)).sort();
	if (sorted.length === 0) return NaN;
	const middle = sorted.length >> 1;
	return sorted.length % 2 ? sorted[middle] : (sorted[middle - 1] + sorted[middle]) / 2;
}

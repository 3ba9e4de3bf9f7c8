/** Which seconds of the reference can be trusted, judged by its own leaps: a heart does not leap. */

/** A step from one second to the next that no heart takes, bpm (p99.99 of recorded rises is 8 bpm in 1 s; 24 h of public recordings). */
const LEAP_BPM = 8;
/** A chain of pieces may bridge this much, bpm, and this much more for every second between them. */
const BRIDGE_BPM = 6;
const BRIDGE_BPM_PER_S = 1;
const WIDEST_BRIDGE_BPM = 30;
/** What a leap within the chain costs, in seconds of kept readings: a piece longer than twice this is not thrown away. */
const LEAP_COST_S = 20;
/** Beyond a gap of this length, s, the level says nothing about what is sound. */
const FORGETTING_S = 60;
/** How many pieces back the chain may reach. */
const REACH = 48;

/**
 * Cuts the trace where it leaps by more than 8 bpm in a second and keeps the chain of pieces that holds the most
 * seconds while leaping least; what lies off the chain is unsound.
 * @param value bpm, one a second, NaN where there is none
 * @returns 1 where a reading is unsound, 0 elsewhere
 */
export function unsoundSeconds(value: Float64Array): Uint8Array {
	const pieces = cutAtLeaps(value);
	const unsound = new Uint8Array(value.length);
	if (pieces.length < 2) return unsound;
	const best = new Float64Array(pieces.length);
	const before = new Int32Array(pieces.length).fill(-1);
	let lastOfBest = 0;
	pieces.forEach((piece, k) => {
		const length = piece.to - piece.from;
		best[k] = length;
		for (let j = k - 1; j >= Math.max(0, k - REACH); j--) {
			const gap = piece.from - pieces[j].to + 1;
			const leap = Math.abs(value[piece.from] - value[pieces[j].to - 1]);
			const allowed = Math.min(WIDEST_BRIDGE_BPM, BRIDGE_BPM + BRIDGE_BPM_PER_S * gap);
			const cost = gap > FORGETTING_S || leap <= allowed ? 0 : LEAP_COST_S;
			if (best[j] + length - cost > best[k]) {
				best[k] = best[j] + length - cost;
				before[k] = j;
			}
		}
		if (best[k] > best[lastOfBest]) lastOfBest = k;
	});
	const kept = new Uint8Array(pieces.length);
	for (let k = lastOfBest; k >= 0; k = before[k]) kept[k] = 1;
	pieces.forEach((piece, k) => {
		if (!kept[k]) unsound.fill(1, piece.from, piece.to);
	});
	return unsound;
}

/** Runs of readings without a leap; a gap of up to 10 s does not occur within, the grid bridges it. */
function cutAtLeaps(value: Float64Array): { from: number; to: number }[] {
	const pieces: { from: number; to: number }[] = [];
	let from = -1;
	for (let i = 0; i <= value.length; i++) {
		const here = i < value.length && !Number.isNaN(value[i]);
		if (from >= 0 && (!here || Math.abs(value[i] - value[i - 1]) > LEAP_BPM)) {
			pieces.push({ from, to: i });
			from = -1;
		}
		if (here && from < 0) from = i;
	}
	return pieces;
}

/**
 * The clock offset from a channel that follows movement at once: cadence, speed or climb, recorded on both sides.
 *
 * Both recorders smooth it a little, each in its own way. What differs in shape is found by smoothing either side with
 * short averages until they match, as far as starts and stops show it; pure delays cannot be seen and stay in the
 * interval.
 */
import { blockLengthS, PROBE_S, resampleShift, winShare, type ResampledShift } from './block-bootstrap';
import { descend, leastWholeSecond } from './close-search';
import { coarseSearch, peaksOf, type CoarseOptions } from './coarse-search';
import { blockAgreement, compared, levelAgreement, type LossScale } from './disagreement';
import type { MovementGrid } from './movement-grid';
import { average } from './smoothers';

export interface MovementOffset extends ResampledShift {
	/** Seconds to add to the wearable's stamps. */
	offsetS: number;
	/** Share of resamples in which this offset beats all others. */
	win: number;
	/** Lead of the best coarse score over the next, times the root of the wearable's seconds. */
	lead: number;
	/** Mean bounded agreement × overlap share, 0 to 1. */
	agreement: number;
	atEdge: boolean;
}

const SEARCH: CoarseOptions = {
	sigma: 6,
	period: 256,
	levelWeight: 2,
	slopes: [
		{ halfS: 1, reachS: 2, limit: 10 },
		{ halfS: 3, reachS: 4, limit: 16 }
	]
};
const SCALE: LossScale = { slopeHalfS: 1, slopeReachS: 2, levelSq: 144, slopeSq: 64 };
const LEAST_VALID_S = 120;
const REACH_S = 8;
/** Averages put on the reference and on the wearable, s: alike in sum, so that none gains by quieting noise. */
const AVERAGES: readonly (readonly [number, number])[] = [
	[1, 5],
	[2, 4],
	[3, 3],
	[4, 2],
	[5, 1]
];
/** The pair that smooths both sides alike. */
const AS_RECORDED = 2;
/** A change of this much within 4 s is a start or a stop. */
const EDGE = 20;
/** With so many seconds of starts and stops the difference in shape counts by half. */
const HALF_TRUST_S = 20;
/** Recorders that write less often than this, s, leave no shape to compare. */
const SHAPE_INTERVAL_S = 1.5;

/**
 * @param reference one movement channel of the reference's recorder, see `movementGrid`
 * @param wearable the same channel of the wearable
 * @param withinS look only at offsets between these, s; all overlaps when left out
 * @returns null when either side is too short or nothing matches
 */
export function movementOffset(reference: MovementGrid, wearable: MovementGrid, withinS?: readonly [number, number]): MovementOffset | null {
	if (reference.valid < LEAST_VALID_S || wearable.valid < LEAST_VALID_S) return null;
	const candidates = peaksOf(coarseSearch(reference, wearable, SEARCH), withinS);
	if (candidates.length === 0 || !(candidates[0].score > 0)) return null;
	const bare = compared(reference.startS, reference.value, SCALE);
	const w = compared(wearable.startS, wearable.value, SCALE);
	const settled = candidates.map((c) => leastWholeSecond(bare, w, Math.round(c.shiftS), 4));
	const blockS = blockLengthS(w.value.length);
	const fits = AVERAGES.map(([onReference, onWearable]) => {
		const r = compared(reference.startS, average(onReference).apply(reference.value), SCALE);
		const v = compared(wearable.startS, average(onWearable).apply(wearable.value), SCALE);
		return { r, v, ...descend(r, v, Math.round(settled[0] + (onReference - onWearable) / 2), REACH_S) };
	});
	const shiftsS = fits.map((fit) => fit.shiftS);
	const losses = fits.map((fit) => fit.loss);
	let best = 0;
	for (let k = 1; k < fits.length; k++) if (losses[k] < losses[best]) best = k;
	const trust = trustInShape(reference, wearable, Math.min(edges(bare.slope), edges(w.slope)));
	const settle = (k: number, shifts: ArrayLike<number>, loss: ArrayLike<number>) => shifts[AS_RECORDED] + trust * (betweenNeighbours(k, shifts, loss) - shifts[AS_RECORDED]);
	const resampled = resampleShift(
		fits.map(({ r, v, shiftS }) => blockAgreement(r, v, [shiftS - PROBE_S, shiftS, shiftS + PROBE_S], blockS)),
		shiftsS,
		settle
	);
	const overlap = levelAgreement(bare, w, settled[0]);
	const root = Math.sqrt(wearable.valid);
	return {
		...resampled,
		offsetS: settle(best, shiftsS, losses),
		win: winShare(blockAgreement(bare, w, settled, blockS)),
		lead: (candidates[0].score - (candidates[1]?.score ?? 0)) * root,
		agreement: overlap.mean * Math.min(1, overlap.n / Math.max(1, Math.min(reference.valid, wearable.valid))),
		atEdge: fits[best].atEdge || Math.abs(settled[0] - Math.round(candidates[0].shiftS)) >= 4
	};
}

/** How far the difference in shape is believed, 0 to 1: only starts and stops show it, in steady movement noise decides. */
function trustInShape(reference: MovementGrid, wearable: MovementGrid, edgeS: number): number {
	return Math.max(reference.medianIntervalS, wearable.medianIntervalS) > SHAPE_INTERVAL_S ? 0 : edgeS / (edgeS + HALF_TRUST_S);
}

/** The shift of the best pair of averages, read between its neighbours: once both sides look alike, their delays are out. */
function betweenNeighbours(best: number, shiftsS: ArrayLike<number>, losses: ArrayLike<number>): number {
	if (best === 0 || best === AVERAGES.length - 1) return shiftsS[best];
	const [a, b, c] = [best - 1, best, best + 1];
	const curve = losses[a] - 2 * losses[b] + losses[c];
	if (!(curve > 0) || !Number.isFinite(curve)) return shiftsS[b];
	const u = Math.max(-0.5, Math.min(0.5, (0.5 * (losses[a] - losses[c])) / curve));
	return shiftsS[b] + (u * (shiftsS[c] - shiftsS[a])) / 2 + (u * u * (shiftsS[a] - 2 * shiftsS[b] + shiftsS[c])) / 2;
}

/** Seconds in which a slope is a start or a stop. */
function edges(slope: Float64Array): number {
	let n = 0;
	for (const g of slope) if (g > EDGE || g < -EDGE) n++;
	return n;
}

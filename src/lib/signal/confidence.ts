/** How sure a best-fit shift is: how narrow under resampling, how far ahead of other shifts, how well the levels agree there. */
import { blockLengthS, PROBE_S, resampleShift, winShare, type ResampledShift } from './block-bootstrap';
import { blockAgreement, levelAgreement, type Compared } from './disagreement';
import { totalOf, type Refined } from './response-bank';

/** The resampled shift is the total shift, the choice of smoother included. */
export interface Confidence extends ResampledShift {
	/** Share of resamples in which the best candidate beats all others. */
	win: number;
	/** Mean bounded agreement of levels at the best shift × overlap share, 0 to 1. */
	agreement: number;
	/** Seconds of the wearable that overlap the reference's readings at the best shift. */
	overlapS: number;
	/** How many blocks of the wearable could be drawn, about. */
	blocks: number;
}

/**
 * @param bare the reference as recorded
 * @param w the wearable
 * @param candidatesS refined shifts with the bare reference, best first; the first belongs to `refined`
 * @param leastValidS seconds with a value of the side that has fewer
 * @param every look at one second in this many only
 */
export function confidenceOf(bare: Compared, w: Compared, refined: Refined, candidatesS: number[], leastValidS: number, every = 1): Confidence {
	const blockS = blockLengthS(w.value.length);
	const members = refined.fits.map(({ reference, shiftS }) => blockAgreement(reference, w, [shiftS - PROBE_S, shiftS, shiftS + PROBE_S], blockS, every));
	const resampled = resampleShift(
		members,
		refined.fits.map((fit) => fit.shiftS),
		totalOf
	);
	const overlap = levelAgreement(bare, w, candidatesS[0] ?? refined.plainS);
	return {
		...resampled,
		win: winShare(blockAgreement(bare, w, candidatesS, blockS, every)),
		agreement: overlap.mean * Math.min(1, overlap.n / Math.max(1, leastValidS)),
		overlapS: overlap.n,
		blocks: Math.ceil(overlap.n / blockS)
	};
}

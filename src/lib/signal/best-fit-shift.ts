/**
 * The best-fit shift of two heart-rate traces, with what is needed to trust it or not.
 *
 * What it is. The shift found is the sum of clock offset and response lag (with its sign: a late wearable needs a
 * negative shift), by the sum of delays of the smoother that explains the wearable best. Between two traces without
 * smoothing it is the shift between them. Heart rate alone cannot tell clock from lag; see `clock-offset`.
 */
import { leastWholeSecond } from './close-search';
import { coarseSearch, peaksOf } from './coarse-search';
import { confidenceOf, type Confidence } from './confidence';
import { compared } from './disagreement';
import { refine, type Refined } from './response-bank';
import { heartRateGrid } from './second-grid';
import type { ShiftEstimate } from './shift';
import type { Trace } from '../formats/recording';
import { zoneWords } from './zone';

/** Least seconds with a value on each side, and least overlap at the best shift, s. */
const LEAST_VALID_S = 120;
const LEAST_OVERLAP_S = 120;

/**
 * Half width of the interval that is left with endless data, s: real smoothers are none of the bank. It and the factor
 * on the resampled spread were chosen so that 95 to 97 % of simulated sessions of 10 to 180 min are covered.
 */
const MODEL_HALF_WIDTH_S = 0.35;
const SPREAD_FACTOR = 1.2;
const VAGUE_S = 0.5;
/** Limits of the rule of reliability; see `judge`. */
const LEAST_LEAD = 20;
const LEAST_WIN = 0.95;
const LEAST_AGREEMENT = 0.5;
/** Among unrelated pairs that pass the other limits none of thousands simulated stayed below 3.5 s. */
const WIDEST_SPREAD_S = 3.3;

/** Of recordings longer than this only so many seconds are compared closely: neighbours tell nearly the same. */
const ENOUGH_S = 14_400;

/** What the rule of reliability looks at. */
export interface Evidence {
	/** Lead of the best score over the next, times the root of the wearable's seconds. */
	lead: number;
	confidence: Confidence;
	refined: Refined;
	/** Seconds of the wearable with a value. */
	validS: number;
	/** Share of the shorter trace that overlaps. */
	overlapShare: number;
}

export interface ShiftSearch {
	estimate: ShiftEstimate;
	evidence: Evidence | null;
}

/** Estimates the best-fit shift. Never throws: what cannot be determined is said in the estimate. */
export function estimateBestFitShift(reference: Pick<Trace, 'tS' | 'value'>, wearable: Pick<Trace, 'tS' | 'value'>): ShiftEstimate {
	return searchBestFitShift(reference, wearable).estimate;
}

export interface SearchOptions {
	/** Look only at shifts between these, s; all overlaps when left out. */
	withinS?: readonly [number, number];
}

/** As `estimateBestFitShift`, with the evidence that the rule of reliability saw. */
export function searchBestFitShift(reference: Pick<Trace, 'tS' | 'value'>, wearable: Pick<Trace, 'tS' | 'value'>, options: SearchOptions = {}): ShiftSearch {
	const r = heartRateGrid(reference);
	const w = heartRateGrid(wearable);
	if (r.valid < LEAST_VALID_S || w.valid < LEAST_VALID_S) {
		const side = r.valid < LEAST_VALID_S ? 'the reference' : 'the wearable';
		const has = Math.min(r.valid, w.valid);
		return {
			estimate: nothing('too-short', `Not determinable: ${side} holds ${has} s of heart rate, and at least ${LEAST_VALID_S} s are needed. Use a longer recording, or place the offset by hand.`),
			evidence: null
		};
	}
	const candidates = peaksOf(coarseSearch(r, w), options.withinS);
	if (candidates.length === 0 || !(candidates[0].score > 0))
		return { estimate: nothing('flat', 'Not determinable: the two traces have nothing in common at any shift. Check that both files belong to the same session, or place the offset by hand.'), evidence: null };

	const bare = compared(r.startS, r.value);
	const worn = compared(w.startS, w.value);
	const every = Math.max(1, Math.floor(Math.min(r.valid, w.valid) / ENOUGH_S));
	const refined = refine(bare, worn, candidates[0].shiftS, every);
	const settled = candidates.map((c, i) => (i === 0 ? refined.plainS : leastWholeSecond(bare, worn, Math.round(c.shiftS), 4, every)));
	const confidence = confidenceOf(bare, worn, refined, settled, Math.min(r.valid, w.valid), every);
	const lead = candidates.length > 1 ? (candidates[0].score - candidates[1].score) * Math.sqrt(w.valid) : candidates[0].score * Math.sqrt(w.valid);
	const evidence: Evidence = { lead, confidence, refined, validS: w.valid, overlapShare: confidence.overlapS / Math.max(1, Math.min(r.valid, w.valid)) };
	const { code, sentence } = judge(evidence);
	const shiftS = settledShift(refined, confidence);
	const half = Math.hypot(SPREAD_FACTOR * student975(confidence.blocks - 1) * confidence.standardErrorS, MODEL_HALF_WIDTH_S);
	const sentences = [sentence];
	if (r.startS + r.value.length <= w.startS || w.startS + w.value.length <= r.startS) sentences.push('The stated times of the two recordings do not overlap, so their shapes alone decided.');
	const zone = zoneWords(shiftS);
	if (zone) sentences.push(`The shift looks like ${zone}.`);
	return {
		estimate: {
			bestFitShiftS: shiftS,
			ci95: [shiftS - half, shiftS + half],
			reliable: code === 'reliable',
			reasonCode: code,
			reason: sentences.join(' '),
			candidates: candidates.map((c, i) => ({ shiftS: i === 0 ? shiftS : c.shiftS, score: c.score })),
			clockOffsetS: null,
			clockOffsetCi95: null,
			responseLagS: null
		},
		evidence
	};
}

/**
 * Sharp evidence is taken as it stands; where resampling scatters, its mean is the better guess, since then the
 * smoother itself is hard to tell and each choice of it moves the shift by seconds.
 */
function settledShift({ totalS }: Refined, { meanS, standardErrorS }: Confidence): number {
	const vague = standardErrorS ** 2 / (standardErrorS ** 2 + VAGUE_S ** 2);
	return totalS + vague * (meanS - totalS);
}

/**
 * 0.975 quantile of Student's t, by its expansion about the normal's: within 0.02 from four degrees of freedom on.
 * Few blocks make resampling too sure of itself; their number less one serves as degrees of freedom.
 * @see Abramowitz and Stegun (1964) 26.7.5
 */
function student975(degrees: number): number {
	const z = 1.959964;
	const n = Math.max(1, degrees);
	return z + (z ** 3 + z) / (4 * n) + (5 * z ** 5 + 16 * z ** 3 + 3 * z) / (96 * n ** 2);
}

/** The rule of reliability: every part must hold; the first that does not gives the reason. */
export function judge(evidence: Evidence): { code: string; sentence: string } {
	const { lead, confidence, refined } = evidence;
	if (confidence.overlapS < LEAST_OVERLAP_S) return { code: 'no-overlap', sentence: 'Not determinable: at the best shift the traces hardly overlap. Check that both belong to the same session, or place the offset by hand.' };
	if (confidence.agreement < LEAST_AGREEMENT) return { code: 'low-agreement', sentence: 'Not reliable: even at the best shift the two heart rates agree for less than half of the time. Check that both belong to the same session; a tag over long faults helps the eye.' };
	if (lead < LEAST_LEAD || confidence.win < LEAST_WIN) return { code: 'several-peaks', sentence: 'Not reliable: another shift fits nearly as well. Compare the candidates at a break or an effort and choose by eye.' };
	if (refined.atEdge) return { code: 'at-edge', sentence: 'Not reliable: the best fit lies at the edge of the close search. Compare the candidates by eye.' };
	if (confidence.spread90S > WIDEST_SPREAD_S) return { code: 'wide-interval', sentence: 'Not reliable: the session is too even to place it within a few seconds. A break or a hard effort near start and end would help; place it by eye.' };
	return { code: 'reliable', sentence: 'Reliable: one shift fits clearly better than all others, with a narrow interval.' };
}

function nothing(reasonCode: string, reason: string): ShiftEstimate {
	return { bestFitShiftS: null, ci95: null, reliable: false, reasonCode, reason, candidates: [], clockOffsetS: null, clockOffsetCi95: null, responseLagS: null };
}

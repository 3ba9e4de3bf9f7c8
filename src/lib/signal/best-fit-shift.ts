/**
 * The best-fit shift of two heart-rate traces, with what is needed to trust it or not.
 *
 * What it is. The shift found is the sum of clock offset and response lag (with its sign: a late wearable needs a
 * negative shift), by the sum of delays of the smoother that explains the wearable best. Between two traces without
 * smoothing it is the shift between them. Heart rate alone cannot tell clock from lag; see `clock-offset`.
 */
import { leastWholeSecond } from './close-search';
import { coarseSearch, HEART_RATE_SEARCH, peaksOf } from './coarse-search';
import { confidenceOf, type Confidence } from './confidence';
import { compared } from './disagreement';
import { refine, type Refined } from './response-bank';
import { levelLine, lineWords, withoutLine, type LevelLine } from './level-line';
import { heartRateGrid, type SecondGrid } from './second-grid';
import type { ShiftCandidate, ShiftEstimate } from './shift';
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

/** Coarse shifts within this are one and the same, s. */
const SAME_PEAK_S = 15;
/** With a line taken out, like warm-ups of two strangers match over a few minutes: so many common seconds are needed. */
const LEAST_OVERLAP_WITH_LINE_S = 900;
/** A line taken out of the levels must leave at most this share of the disagreement. */
const WORTHWHILE_SHARE = 0.75;

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
	/** What was taken out of the wearable's levels before; null where it reads right. */
	line: LevelLine | null;
}

export interface ShiftSearch {
	estimate: ShiftEstimate;
	evidence: Evidence | null;
}

export interface SearchOptions {
	/** Look only at shifts between these, s; all overlaps when left out. */
	withinS?: readonly [number, number];
}

/** Searches one shift for the whole of both traces, with the evidence that the rule of reliability saw. Never throws. */
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
	const first = attempt(r, w, options);
	const settled = first && isReliable(first) ? first : (bySlopesAlone(r, w, first, options) ?? first);
	if (!settled)
		return { estimate: nothing('flat', 'Not determinable: the two traces have nothing in common at any shift. Check that both files belong to the same session, or place the offset by hand.'), evidence: null };
	return { estimate: estimateOf(r, w, settled), evidence: settled.evidence };
}

/** One search from end to end. */
interface Attempt {
	candidates: ShiftCandidate[];
	evidence: Evidence;
}

const isReliable = ({ evidence }: Attempt) => judge(evidence).code === 'reliable';

/** Search, refine, weigh; and once more without the line when the wearable reads high or low throughout. */
function attempt(r: SecondGrid, w: SecondGrid, { withinS }: SearchOptions, line: LevelLine | null = null): Attempt | null {
	const wearable = line ? { ...w, value: withoutLine(w.value, line) } : w;
	const candidates = peaksOf(coarseSearch(r, wearable), withinS);
	if (candidates.length === 0 || !(candidates[0].score > 0)) return null;
	const bare = compared(r.startS, r.value);
	const worn = compared(w.startS, wearable.value);
	const every = Math.max(1, Math.floor(Math.min(r.valid, w.valid) / ENOUGH_S));
	const refined = refine(bare, worn, candidates[0].shiftS, every);
	if (!line) {
		const fit = refined.fits.find((f) => f.smoother === refined.smoother);
		const found = fit ? levelLine(fit.reference, worn, fit.shiftS, every) : null;
		const again = found ? attempt(r, w, { withinS }, found) : null;
		if (again && Math.abs(again.candidates[0].shiftS - candidates[0].shiftS) <= SAME_PEAK_S && again.evidence.refined.loss <= WORTHWHILE_SHARE * refined.loss) return again;
	}
	const settled = candidates.map((c, i) => (i === 0 ? refined.plainS : leastWholeSecond(bare, worn, Math.round(c.shiftS), 4, every)));
	const confidence = confidenceOf(bare, worn, refined, settled, Math.min(r.valid, w.valid), every);
	const lead = candidates.length > 1 ? (candidates[0].score - candidates[1].score) * Math.sqrt(w.valid) : candidates[0].score * Math.sqrt(w.valid);
	return { candidates, evidence: { lead, confidence, refined, line, validS: w.valid, overlapShare: confidence.overlapS / Math.max(1, Math.min(r.valid, w.valid)) } };
}

/**
 * A wearable far off throughout hides its place from a search by levels. Slopes alone know nothing of levels: where
 * they point, the line is taken, and the whole search with the line taken out must point there too.
 */
function bySlopesAlone(r: SecondGrid, w: SecondGrid, first: Attempt | null, options: SearchOptions): Attempt | null {
	const [bySlopes] = peaksOf(coarseSearch(r, w, { ...HEART_RATE_SEARCH, levelWeight: 0 }), options.withinS);
	if (!bySlopes || (first && Math.abs(first.candidates[0].shiftS - bySlopes.shiftS) <= SAME_PEAK_S)) return null;
	const line = levelLine(compared(r.startS, r.value), compared(w.startS, w.value), bySlopes.shiftS);
	const found = line ? attempt(r, w, options, line) : null;
	return found && isReliable(found) && Math.abs(found.candidates[0].shiftS - bySlopes.shiftS) <= SAME_PEAK_S ? found : null;
}

function estimateOf(r: SecondGrid, w: SecondGrid, { candidates, evidence }: Attempt): ShiftEstimate {
	const { refined, confidence, line } = evidence;
	const { code, sentence } = judge(evidence);
	const shiftS = settledShift(refined, confidence);
	const half = Math.hypot(SPREAD_FACTOR * student975(confidence.blocks - 1) * confidence.standardErrorS, MODEL_HALF_WIDTH_S);
	const sentences = [sentence];
	if (line && code !== 'levels-apart') sentences.push(`The wearable reads ${lineWords(line)} throughout; the search allowed for it.`);
	if (r.startS + r.value.length <= w.startS || w.startS + w.value.length <= r.startS) sentences.push('The stated times of the two recordings do not overlap, so their shapes alone decided.');
	const zone = zoneWords(shiftS);
	if (zone) sentences.push(`The shift looks like ${zone}.`);
	return {
		bestFitShiftS: shiftS,
		ci95: [shiftS - half, shiftS + half],
		reliable: code === 'reliable',
		reasonCode: code,
		reason: sentences.join(' '),
		candidates: candidates.map((c, i) => ({ shiftS: i === 0 ? shiftS : c.shiftS, score: c.score })),
		clockOffsetS: null,
		clockOffsetCi95: null,
		responseLagS: null
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
 * 0.975 quantile of Student's t, by its expansion about the normal: within 0.05 from four degrees of freedom on, 0.01 from eight.
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
	const { lead, confidence, refined, line } = evidence;
	if (confidence.overlapS < LEAST_OVERLAP_S) return { code: 'no-overlap', sentence: 'Not determinable: at the best shift the traces hardly overlap. Check that both belong to the same session, or place the offset by hand.' };
	if (confidence.agreement < LEAST_AGREEMENT) return { code: 'low-agreement', sentence: 'Not reliable: even at the best shift the two heart rates agree for less than half of the time. Check that both belong to the same session; a tag over long faults helps the eye.' };
	if (lead < LEAST_LEAD || confidence.win < LEAST_WIN) return { code: 'several-peaks', sentence: 'Not reliable: another shift fits nearly as well. Compare the candidates at a break or an effort and choose by eye.' };
	if (refined.atEdge) return { code: 'at-edge', sentence: 'Not reliable: the best fit lies at the edge of the close search. Compare the candidates by eye.' };
	if (confidence.spread90S > WIDEST_SPREAD_S) return { code: 'wide-interval', sentence: 'Not reliable: the session is too even to place it within a few seconds. A break or a hard effort near start and end would help; place it by eye.' };
	if (line && confidence.overlapS < LEAST_OVERLAP_WITH_LINE_S)
		return { code: 'levels-apart', sentence: `Not reliable: the wearable reads ${lineWords(line)}, and ${Math.round(confidence.overlapS / 60)} min are too few to tell that from another wearer's recording. Check that both files belong to the same session, and place it by eye.` };
	return { code: 'reliable', sentence: 'Reliable: one shift fits clearly better than all others, with a narrow interval.' };
}

function nothing(reasonCode: string, reason: string): ShiftEstimate {
	return { bestFitShiftS: null, ci95: null, reliable: false, reasonCode, reason, candidates: [], clockOffsetS: null, clockOffsetCi95: null, responseLagS: null };
}

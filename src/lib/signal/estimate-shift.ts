/** The best-fit shift as pages and programs ask for it: one shift for the whole recording, or the word that none serves. */
import type { Trace } from '../formats/recording';
import { searchBestFitShift, type ShiftSearch } from './best-fit-shift';
import { pauseSentence, splitAtPauses, type Part } from './pause-split';
import type { ShiftEstimate } from './shift';

type Readings = Pick<Trace, 'tS' | 'value'>;

/** Where the levels agree this well all along, no part of the recording can have a shift of its own. */
const AGREES_THROUGHOUT = 0.9;

/**
 * Estimates the best-fit shift of two heart-rate traces. Never throws: what cannot be determined is said in the estimate.
 * Where one of the clocks left paused time out, the shift of the longer fitting part is given, not as reliable.
 */
export function estimateBestFitShift(reference: Readings, wearable: Readings): ShiftEstimate {
	return estimateInParts(reference, wearable).estimate;
}

/** As `estimateBestFitShift`, with the parts where the recording must be split; null where one shift serves. */
export function estimateInParts(reference: Readings, wearable: Readings): { estimate: ShiftEstimate; parts: Part[] | null } {
	const whole = searchBestFitShift(reference, wearable);
	const parts = mayFallApart(whole) ? splitAtPauses(reference, wearable, searchBestFitShift, whole) : null;
	if (!parts) return { estimate: whole.estimate, parts: null };
	return { estimate: { ...whole.estimate, reliable: false, reasonCode: 'paused-clock', reason: `Not reliable: ${lowerFirst(pauseSentence(parts))}` }, parts };
}

const mayFallApart = ({ evidence }: ShiftSearch) => evidence !== null && evidence.confidence.agreement < AGREES_THROUGHOUT;
const lowerFirst = (text: string) => text[0].toLowerCase() + text.slice(1);

/**
 * The words of time alignment.
 *
 * Three quantities, three names. The **clock offset** is what stands between the two clocks. The **response lag**
 * is how late the wearable follows the heart. The **best-fit shift** is what heart rate alone can show: their sum
 * (less the reference's own lag). Every one is in **seconds to add to the wearable's time stamps** to put them on
 * the reference's clock, except the response lag, which is positive when the wearable follows late.
 */
export interface ShiftCandidate {
	shiftS: number;
	/** Coarse score of the candidate, higher is better; comparable only within one search. */
	score: number;
}

/** Why an estimate may or may not be trusted; stable codes for programs, a sentence for people. */
export interface ShiftEstimate {
	/** Null when nothing can be determined at all (too few samples). */
	bestFitShiftS: number | null;
	/** 95 % interval of the best-fit shift, s. */
	ci95: [number, number] | null;
	reliable: boolean;
	/** `reliable`, `too-short`, `no-overlap`, `several-peaks`, `flat`, `low-agreement`, `at-edge`, `wide-interval`, `paused-clock`, ... */
	reasonCode: string;
	/** One plain sentence, with the remedy where the estimate is not reliable. */
	reason: string;
	/** Best first; at most six, at least 15 s apart. */
	candidates: ShiftCandidate[];
	/** Clock offset, s; null until a channel free of lag stands on both sides. */
	clockOffsetS: number | null;
	clockOffsetCi95: [number, number] | null;
	/** Response lag, s, positive = the wearable follows late; null until the clock offset is known. */
	responseLagS: number | null;
}

/** Agreement against shift, for the offset control: Pearson r of the overlapping values at each shift. */
export interface ShiftCurve {
	shiftS: Float64Array;
	/** NaN where fewer than the minimum of values overlap. */
	r: Float64Array;
}

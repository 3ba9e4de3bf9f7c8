/** One wearable's recording against the reference's: best-fit shift from heart rate, clock offset and response lag where they can be known. */
import { traceOf, type Recording } from '../formats/recording';
import { searchBestFitShift } from './best-fit-shift';
import { clockOffset, clocksAround, type ClockOffset } from './clock-offset';
import { estimateInParts } from './estimate-shift';
import type { Part } from './pause-split';
import type { ShiftEstimate } from './shift';

export interface RecordingAlignment extends ShiftEstimate {
	/** How the clock offset was found; null where it is unknown. */
	clock: ClockOffset | null;
	/** Stretches of the wearable with shifts of their own, where a clock left paused time out; null where one shift serves. */
	parts: Part[] | null;
}

/**
 * Aligns two recordings. Their stated times need not overlap: shapes decide, and a zone mistake is named.
 *
 * The response lag is the clock offset less the best-fit shift: positive when the wearable follows later than the
 * reference's own heart rate, which for a strap's displayed value is itself 2 to 3 s late.
 * @returns an estimate that says in words what cannot be determined; never throws
 */
export function alignRecordings(reference: Pick<Recording, 'traces'>, wearable: Pick<Recording, 'traces'>): RecordingAlignment {
	const r = traceOf(reference, 'heartRate') ?? NO_HEART_RATE;
	const w = traceOf(wearable, 'heartRate') ?? NO_HEART_RATE;
	const { estimate: whole, parts } = estimateInParts(r, w);
	// One offset cannot serve clocks that part at a pause.
	if (parts) return { ...whole, clock: null, parts };
	let estimate = whole;
	const clock = clockOffset(reference.traces, wearable.traces, estimate.reliable ? estimate.bestFitShiftS : null);
	if (!clock) return { ...estimate, clock: null, parts: null };
	if (!estimate.reliable) {
		// The clocks say where to look: the best-fit shift lies a wearable's lag before them.
		const [earliestS, latestS] = clocksAround(0);
		const near = searchBestFitShift(r, w, { withinS: [clock.offsetS - latestS, clock.offsetS - earliestS] }).estimate;
		if (near.bestFitShiftS !== null) estimate = { ...near, reason: `${near.reason} Looked for near the clock offset that ${clock.channel === 'rrInterval' ? 'the beats' : clock.channel} shows.` };
	}
	return {
		...estimate,
		clockOffsetS: clock.offsetS,
		clockOffsetCi95: clock.ci95,
		responseLagS: estimate.bestFitShiftS === null ? null : clock.offsetS - estimate.bestFitShiftS,
		clock,
		parts: null
	};
}

const NO_HEART_RATE = { tS: new Float64Array(0), value: new Float64Array(0) };

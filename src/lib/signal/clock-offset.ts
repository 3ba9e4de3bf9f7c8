/**
 * The offset between two clocks, from channels that follow the wearer without lag.
 *
 * Best are beats on both sides; then cadence, speed and climb. A channel counts only where it is sure by itself, and
 * where it does not contradict a reliable heart rate: a wearable may follow late by half a minute at most.
 */
import { traceOf, type Trace } from '../formats/recording';
import { beatOffset } from './beat-offset';
import { movementGrid, type MovementKind } from './movement-grid';
import { movementOffset, type MovementOffset } from './movement-offset';

export interface ClockOffset {
	channel: 'rrInterval' | MovementKind;
	/** Seconds to add to the wearable's stamps, at the middle of the session. */
	offsetS: number;
	ci95: [number, number];
	/** From beats only: how much faster the reference's clock runs, millionths. */
	driftPpm: number | null;
	driftCi95: [number, number] | null;
	/** How it was found and what stays unknown, one sentence. */
	sentence: string;
}

/**
 * Two recorders smooth and delay movement differently by up to so much, s: averages of 1 to 5 s and delays up to 1 s
 * on either side. Common practice, no source.
 */
const RECORDERS_DIFFER_S: Record<MovementKind, number> = { cadence: 1.5, speed: 1.5, altitude: 2.5 };
/** More of it where a recorder writes less than once a second, s. */
const SPARSE_DIFFER_S = 0.5;
const WORD: Record<ClockOffset['channel'], string> = { rrInterval: 'beats', cadence: 'cadence', speed: 'speed', altitude: 'altitude' };
/** Factor on the resampled spread, as for the best-fit shift. */
const SPREAD_FACTOR = 1.2;
/** A wearable follows this much early (against a strap that averages) to this much late, s. */
const EARLIEST_S = -6;
const LATEST_S = 35;

/** Range of clock offsets that a best-fit shift allows, s. */
export const clocksAround = (bestFitShiftS: number): [number, number] => [bestFitShiftS + EARLIEST_S, bestFitShiftS + LATEST_S];

/**
 * @param reference all traces of the reference's recording
 * @param wearable all traces of the wearable's
 * @param bestFitShiftS what heart rate shows, s, where that is reliable; null otherwise
 * @returns null when no channel stands on both sides, or none is sure
 */
export function clockOffset(reference: readonly Trace[], wearable: readonly Trace[], bestFitShiftS: number | null): ClockOffset | null {
	return fromBeats(reference, wearable, bestFitShiftS) ?? fromMovement(reference, wearable, bestFitShiftS);
}

function fromBeats(reference: readonly Trace[], wearable: readonly Trace[], bestFitShiftS: number | null): ClockOffset | null {
	const [r, w] = [reference, wearable].map((traces) => traceOf({ traces: [...traces] }, 'rrInterval'));
	if (!r || !w) return null;
	const found = beatOffset(r, w);
	if (!found || (bestFitShiftS !== null && outside(found.offsetS, clocksAround(bestFitShiftS)))) return null;
	return {
		channel: 'rrInterval',
		offsetS: found.offsetS,
		ci95: found.ci95,
		driftPpm: found.driftPpm,
		driftCi95: found.driftCi95,
		sentence: `From the beats themselves: ${found.found} of ${found.lookedFor} runs of beats were found in both lists. Where each recorder puts its beats within a second stays unknown (±0.5 s).`
	};
}

function fromMovement(reference: readonly Trace[], wearable: readonly Trace[], bestFitShiftS: number | null): ClockOffset | null {
	let best: ClockOffset | null = null;
	for (const kind of ['cadence', 'speed', 'altitude'] as const) {
		const r = movementGrid(reference, kind);
		const w = movementGrid(wearable, kind);
		if (!r || !w) continue;
		const found = movementOffset(r, w, bestFitShiftS === null ? undefined : clocksAround(bestFitShiftS));
		if (!found || !isSure(found, bestFitShiftS !== null)) continue;
		const differS = RECORDERS_DIFFER_S[kind] + (Math.max(r.medianIntervalS, w.medianIntervalS) > 1.5 ? SPARSE_DIFFER_S : 0);
		const half = Math.hypot(SPREAD_FACTOR * 1.96 * found.standardErrorS, differS);
		if (best && best.ci95[1] - best.ci95[0] <= 2 * half) continue;
		best = {
			channel: kind,
			offsetS: found.offsetS,
			ci95: [found.offsetS - half, found.offsetS + half],
			driftPpm: null,
			driftCi95: null,
			sentence: `From ${WORD[kind]} on both sides. How much each recorder smooths and delays it stays unknown (±${differS} s).`
		};
	}
	return best;
}

/** With a reliable heart rate only a short stretch of offsets is open, and the lead over far ones does not matter. */
function isSure(found: MovementOffset, heartRateIsReliable: boolean): boolean {
	if (found.atEdge || found.spread90S > 2.5 || found.agreement < 0.5 || found.win < 0.95) return false;
	return heartRateIsReliable || found.lead >= 20;
}

const outside = (value: number, [low, high]: [number, number]) => value < low || value > high;

/** One recording as the bench draws it: its lines ready for drawing, and where its clock stands. */
import { traceOf, type Trace } from '../../formats/recording';
import { onAxis, type AlignmentState, type TimelineTrack } from '../model';
import { gapLimitS, type LineSamples } from './line-path';

export type ClockPlace = Pick<AlignmentState, 'offsetS' | 'driftPpm'>;
export const ON_REFERENCE_CLOCK: ClockPlace = { offsetS: 0, driftPpm: 0 };

export interface BenchTrack {
	recordingId: string;
	number: number;
	role: 'reference' | 'wearable';
	name: string;
	shortName: string;
	/** Without readings where the file holds no heart rate. */
	heartRate: LineSamples;
	cadence: LineSamples | null;
	/** First and last sample of any channel, own clock; 0 and 0 for a recording without samples. */
	firstS: number;
	lastS: number;
}

const NO_SAMPLES: LineSamples = { tS: new Float64Array(0), value: new Float64Array(0), gapS: Infinity };

const lineOf = (trace: Trace | undefined): LineSamples | null =>
	trace && trace.tS.length > 0 ? { tS: trace.tS, value: trace.value, gapS: gapLimitS(trace.tS) } : null;

/** Prepares a track once per load: neither offsets nor the view change what is computed here. */
export function benchTrack(track: TimelineTrack): BenchTrack {
	const firsts = track.traces.filter((t) => t.tS.length > 0);
	return {
		recordingId: track.recordingId,
		number: track.number,
		role: track.role,
		name: track.name,
		shortName: track.shortName,
		heartRate: lineOf(traceOf(track, 'heartRate')) ?? NO_SAMPLES,
		cadence: lineOf(traceOf(track, 'cadence')),
		firstS: firsts.length ? Math.min(...firsts.map((t) => t.tS[0])) : 0,
		lastS: firsts.length ? Math.max(...firsts.map((t) => t.tS[t.tS.length - 1])) : 0
	};
}

/** From where to where a recording reaches on the session axis; null when it holds no samples. */
export function spanOnAxis(track: BenchTrack, place: ClockPlace): { fromS: number; toS: number } | null {
	if (track.firstS === 0 && track.lastS === 0) return null;
	return { fromS: onAxis(track.firstS, place, track.firstS), toS: onAxis(track.lastS, place, track.firstS) };
}

/** Share of a trace's readings at either end that may lie outside the frame: wild single values touch the edge instead of squeezing the rest. */
const OUTSIDE_SHARE = 0.003;

/** Values that the heart-rate plot must hold: the same for every part of the session, so that panning never rescales. */
export function heartRateRange(tracks: readonly BenchTrack[]): { low: number; high: number } {
	let low = Infinity;
	let high = -Infinity;
	for (const { heartRate } of tracks) {
		if (heartRate.value.length === 0) continue;
		const sorted = heartRate.value.slice().sort();
		const outside = Math.floor(OUTSIDE_SHARE * sorted.length);
		low = Math.min(low, sorted[outside]);
		high = Math.max(high, sorted[sorted.length - 1 - outside]);
	}
	if (low > high) return { low: 50, high: 190 };
	const middle = (low + high) / 2;
	const half = Math.max(20, (high - low) / 2);
	return { low: middle - half - 4, high: middle + half + 4 };
}

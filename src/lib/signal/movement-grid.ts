/** Cadence, speed and climb on whole seconds: channels that follow the wearer's movement at once, unlike the heart. */
import type { ChannelKind, Trace } from '../formats/recording';
import { secondGrid, type SecondGrid } from './second-grid';
import { centredMean } from './slopes';

/** Channels free of response lag, in one scale: so many units for 1/min, m/s, and m climbed in 10 s. */
export const MOVEMENT_SCALE = { cadence: 1, speed: 10, altitude: 6 } as const;
export type MovementKind = keyof typeof MOVEMENT_SCALE;

export interface MovementGrid extends SecondGrid {
	/** Usual time between records, s. */
	medianIntervalS: number;
}

/** Half of the mean, and half of the reach, over which climb is read, s. */
const CLIMB_HALF_S = 2;
const CLIMB_REACH_S = 5;

/**
 * One movement channel on the recorder's clock.
 *
 * Readers keep no reading of 0, so a standing wearer is a gap in cadence and speed. A record that the recorder wrote
 * without it stands for 0: stops are what tells most. Where nothing at all was written, the grid stays empty.
 * @param traces all channels of the recording
 * @returns null when the recording lacks the channel
 */
export function movementGrid(traces: readonly Trace[], kind: MovementKind): MovementGrid | null {
	const trace = traces.find((t) => t.kind === kind);
	if (!trace || trace.tS.length < 2) return null;
	const scale = MOVEMENT_SCALE[kind];
	if (kind === 'altitude') {
		const grid = secondGrid(trace);
		return counted(grid.startS, climb(grid.value).map((v) => v * scale), medianInterval(trace.tS));
	}
	const tS = recordTimes(traces);
	const value = new Float64Array(tS.length);
	for (let i = 0, k = 0; i < tS.length; i++) {
		while (k < trace.tS.length && trace.tS[k] < tS[i]) k++;
		value[i] = k < trace.tS.length && trace.tS[k] === tS[i] ? trace.value[k] * scale : 0;
	}
	return { ...secondGrid({ tS, value }), medianIntervalS: medianInterval(tS) };
}

/** Traces that the recorder itself stamps, once a record. */
const STAMPED_BY_RECORDER: ChannelKind[] = ['heartRate', 'cadence', 'speed', 'power', 'altitude', 'distance', 'temperature'];

function counted(startS: number, value: Float64Array, medianIntervalS: number): MovementGrid {
	let valid = 0;
	for (const v of value) if (v === v) valid++;
	return { startS, value, valid, medianIntervalS };
}

/** Metres climbed in 10 s. */
function climb(altitudeM: Float64Array): Float64Array {
	const mean = centredMean(altitudeM, CLIMB_HALF_S);
	const out = new Float64Array(mean.length).fill(NaN);
	for (let i = CLIMB_REACH_S; i + CLIMB_REACH_S < mean.length; i++) out[i] = mean[i + CLIMB_REACH_S] - mean[i - CLIMB_REACH_S];
	return out;
}

/** Every time at which the recorder wrote something, rising. */
function recordTimes(traces: readonly Trace[]): Float64Array {
	const all = new Set<number>();
	for (const { kind, tS } of traces) if (STAMPED_BY_RECORDER.includes(kind)) for (const t of tS) all.add(t);
	return Float64Array.from(all).sort();
}

function medianInterval(tS: Float64Array): number {
	const steps = Float64Array.from({ length: tS.length - 1 }, (_, i) => tS[i + 1] - tS[i]).sort();
	return steps.length > 0 ? steps[steps.length >> 1] : Infinity;
}

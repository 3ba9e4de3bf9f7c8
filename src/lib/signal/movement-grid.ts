/** Cadence, speed and climb on whole seconds: channels that follow the wearer's movement at once, unlike the heart. */
import type { ChannelKind, Trace } from '../formats/recording';
import { secondGrid, type SecondGrid } from './second-grid';
import { centredMean } from './slopes';

/** Channels free of response lag, in one scale: so many units for 1/min, m/s, and m climbed in 10 s. */
export const MOVEMENT_SCALE = { cadence: 1, speed: 10, altitude: 6 } as const;
export type MovementKind = keyof typeof MOVEMENT_SCALE;

/** A recorder that wrote anything within this time was running, s. */
const RUNNING_S = 3;
/** Half of the mean, and half of the reach, over which climb is read, s. */
const CLIMB_HALF_S = 2;
const CLIMB_REACH_S = 5;

/**
 * One movement channel on the recorder's clock.
 *
 * Readers keep no reading of 0, so a standing wearer is a gap in cadence and speed. Where the recorder wrote other
 * values meanwhile, the gap is filled with 0: stops are what tells most. Where it wrote nothing, it stays empty.
 * @param traces all channels of the recording
 * @returns null when the recording lacks the channel
 */
export function movementGrid(traces: readonly Trace[], kind: MovementKind): SecondGrid | null {
	const trace = traces.find((t) => t.kind === kind);
	if (!trace || trace.tS.length < 2) return null;
	const scale = MOVEMENT_SCALE[kind];
	if (kind === 'altitude') {
		const grid = secondGrid(trace);
		return counted(grid.startS, climb(grid.value).map((v) => v * scale));
	}
	const running = runningSeconds(traces.filter((t) => STAMPED_BY_RECORDER.includes(t.kind)));
	if (!running) return null;
	const grid = secondGrid(trace, 0, Infinity, RUNNING_S);
	const value = new Float64Array(running.on.length).fill(NaN);
	for (let i = 0; i < value.length; i++) {
		const v = grid.value[i + running.startS - grid.startS];
		if (v === v && v !== undefined) value[i] = v * scale;
		else if (running.on[i]) value[i] = 0;
	}
	return counted(running.startS, value);
}

/** Traces that the recorder itself stamps, once a record. */
const STAMPED_BY_RECORDER: ChannelKind[] = ['heartRate', 'cadence', 'speed', 'power', 'altitude', 'distance', 'temperature'];

function counted(startS: number, value: Float64Array): SecondGrid {
	let valid = 0;
	for (const v of value) if (v === v) valid++;
	return { startS, value, valid };
}

/** Metres climbed in 10 s. */
function climb(altitudeM: Float64Array): Float64Array {
	const mean = centredMean(altitudeM, CLIMB_HALF_S);
	const out = new Float64Array(mean.length).fill(NaN);
	for (let i = CLIMB_REACH_S; i + CLIMB_REACH_S < mean.length; i++) out[i] = mean[i + CLIMB_REACH_S] - mean[i - CLIMB_REACH_S];
	return out;
}

/** Seconds within reach of any reading, from the first to the last. */
function runningSeconds(traces: readonly Trace[]): { startS: number; on: Uint8Array } | null {
	let first = Infinity;
	let last = -Infinity;
	for (const { tS } of traces) {
		if (tS.length === 0) continue;
		first = Math.min(first, tS[0]);
		last = Math.max(last, tS[tS.length - 1]);
	}
	if (!(last > first) || last - first > 4 * 86_400) return null;
	const startS = Math.ceil(first);
	const on = new Uint8Array(Math.floor(last) - startS + 1);
	for (const { tS } of traces) for (const t of tS) on.fill(1, Math.max(0, Math.round(t) - startS - RUNNING_S), Math.max(0, Math.round(t) - startS + RUNNING_S + 1));
	return { startS, on };
}

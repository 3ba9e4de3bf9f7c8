/** How a trace is sampled, in figures: for the command line and for the import page. */
import type { ChannelKind, Trace } from './recording';

export interface TraceDescription {
	kind: ChannelKind;
	/** Values in the file that are neither empty nor 0. */
	n: number;
	min: number;
	max: number;
	/** Median time between neighbouring values, s; null for fewer than two. */
	medianIntervalS: number | null;
	/** Longest time between neighbouring values, s; null for fewer than two. */
	maxGapS: number | null;
}

/**
 * Count, range and spacing of a trace.
 *
 * @param trace a trace with at least one value
 * @returns figures rounded to the thousandth
 */
export function describeTrace(trace: Trace): TraceDescription {
	const steps = new Float64Array(Math.max(0, trace.tS.length - 1));
	for (let i = 0; i < steps.length; i++) steps[i] = trace.tS[i + 1] - trace.tS[i];
	steps.sort();
	const middle = steps.length >> 1;
	const median = steps.length === 0 ? null : steps.length % 2 ? steps[middle] : (steps[middle - 1] + steps[middle]) / 2;
	const { n, min, max } = trace.inFile ?? countedIn(trace);
	return {
		kind: trace.kind,
		n,
		min: rounded(min),
		max: rounded(max),
		medianIntervalS: median === null ? null : rounded(median),
		maxGapS: steps.length === 0 ? null : rounded(steps[steps.length - 1])
	};
}

function countedIn(trace: Trace): { n: number; min: number; max: number } {
	let n = 0;
	let min = Infinity;
	let max = -Infinity;
	for (const value of trace.value) {
		if (value === 0 && trace.kind !== 'altitude' && trace.kind !== 'temperature') continue;
		n++;
		if (value < min) min = value;
		if (value > max) max = value;
	}
	return { n, min, max };
}

function rounded(value: number): number {
	return Number(value.toFixed(3));
}

/** The reference: beats of the simulated heart, their RR intervals, and the heart rate that a strap displays. */
import type { Trace } from '../formats/recording';
import { TRUTH_DT_S, type Truth } from './heart';
import type { RandomStream } from './random';

export interface ReferenceFault {
	startS: number;
	endS: number;
}

export interface SimulatedReference {
	heartRate: Trace;
	rrInterval: Trace;
	/** Averaging window of the displayed value, s. */
	windowS: number;
	/** How late the displayed value is, s: half the window and three quarters of an RR interval. */
	delayS: number;
	faults: ReferenceFault[];
}

/**
 * Beats by integral pulse frequency modulation: a beat falls whenever the integral of the rate passes a whole number.
 * RR intervals carry 1.5 ms of jitter and the 1/1024 s of usual recorders; the displayed value is 60 n over the last
 * RR intervals that cover the window, a whole number once a second, hence about 2 to 3 s late.
 */
export function simulateReference(truth: Truth, startS: number, random: RandomStream, withFault: boolean): SimulatedReference {
	const beatS: number[] = [];
	let phase = random.unit();
	for (let i = 0; i < truth.n - 1; i++) {
		// The mean of both ends: with one end alone the beats would stand half a step late.
		const rate = (truth.heartRateBpm[i] + truth.heartRateBpm[i + 1]) / 120;
		const step = rate * TRUTH_DT_S;
		if (phase + step >= 1) {
			beatS.push((i + (1 - phase) / step) * TRUTH_DT_S);
			phase += step - 1;
		} else phase += step;
	}
	const rrS: number[] = [];
	const rrAtS: number[] = [];
	for (let i = 1; i < beatS.length; i++) {
		rrS.push(Math.round((beatS[i] - beatS[i - 1] + 0.0015 * random.normal()) * 1024) / 1024);
		rrAtS.push(beatS[i]);
	}

	const windowS = random.uniform(3, 5);
	const n = Math.floor((truth.n - 1) * TRUTH_DT_S);
	const tS: number[] = [];
	const value: number[] = [];
	let last = -1;
	for (let t = 1; t <= n; t++) {
		while (last + 1 < rrAtS.length && rrAtS[last + 1] <= t) last++;
		if (last < 1) continue;
		let sum = 0;
		let count = 0;
		for (let j = last; j >= 0 && sum < windowS; j--) {
			sum += rrS[j];
			count++;
		}
		tS.push(t);
		value.push(Math.round((60 * count) / sum));
	}
	const meanRrS = rrS.reduce((a, b) => a + b, 0) / Math.max(1, rrS.length);

	const faults: ReferenceFault[] = [];
	if (withFault) {
		const endS = random.uniform(25, 170);
		faults.push({ startS: startS + tS[0], endS: startS + endS });
		spoilStart(tS, value, endS, random);
	}
	return {
		heartRate: { kind: 'heartRate', tS: Float64Array.from(tS, (t) => startS + t), value: Float64Array.from(value) },
		rrInterval: { kind: 'rrInterval', tS: Float64Array.from(rrAtS, (t) => startS + t), value: Float64Array.from(rrS, (r) => r * 1000) },
		windowS,
		delayS: windowS / 2 + 0.75 * meanRrS,
		faults
	};
}

/** Dry electrodes in the first minutes: holds, halved values, spikes of 1.35 to 2 times. */
function spoilStart(tS: number[], value: number[], endS: number, random: RandomStream): void {
	let i = 0;
	while (i < tS.length && tS[i] < endS) {
		const length = random.whole(2, 9);
		const way = random.unit();
		const held = value[i];
		const factor = way < 0.35 ? 0.5 : random.uniform(1.35, 2);
		for (let k = 0; k < length && i < tS.length && tS[i] < endS; k++, i++) {
			if (way < 0.3) value[i] = held;
			else if (way < 0.75) value[i] = Math.min(240, Math.round(value[i] * factor));
		}
		i += random.whole(1, 12);
	}
}

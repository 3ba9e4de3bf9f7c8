/** A simulated wearable: what it sees, smooths, loses and writes, on its own clock. */
import type { Trace } from '../formats/recording';
import type { Activity, Stretch } from './course';
import { drawFaults, spoilSource, type Fault, type FaultKind, type FaultRates } from './faults';
import { TRUTH_DT_S, type Truth } from './heart';
import { ouNoise, type RandomStream } from './random';

/** What is fixed of a device; what is left out is drawn. */
export interface WearableCharacter {
	/** First-order time constant, moving-average window and pure delay of its smoothing, s. */
	tauS: number;
	windowS: number;
	delayS: number;
	noiseSdBpm: number;
	faults: FaultRates;
	/** Seconds to add to its stamps at the middle of the session to put them on the reference's clock. */
	clockOffsetS: number;
	/** How much faster the reference's clock runs than the device's, millionths. */
	driftPpm: number;
	/** Writes every second, or when it pleases (1 to 8 s). */
	irregular: boolean;
	/** Starts this much after, and stops this much before, the reference, s. */
	startsLateS: number;
	stopsEarlyS: number;
	recordsCadence: boolean;
}

export interface TruthEvent {
	kind: FaultKind;
	/** When the cause acts. */
	startS: number;
	endS: number;
	/** Where the output is off by more than 5 bpm because of it; null when it never is. */
	visible: { startS: number; endS: number; meanAbsErrorBpm: number } | null;
}

export interface WearableTruth {
	/** At the middle of the recording, s to add. */
	clockOffsetS: number;
	driftPpm: number;
	/** Delay of the device against the reference's displayed value, s; positive = late. */
	responseLagS: number;
	/** clockOffsetS − responseLagS: what heart rate alone can show, by the sum of delays. */
	totalShiftS: number;
	/** The shift of least squared disagreement without faults and noise. */
	bestFitShiftS: number;
	/** On the reference's clock, epoch s. */
	events: TruthEvent[];
}

export interface SimulatedWearable {
	heartRate: Trace;
	cadence: Trace | null;
	truth: WearableTruth;
	character: WearableCharacter;
}

/** Smoothing of the device on the truth grid: moving average, then first order, then delay. */
export function smoothed(source: Float64Array, character: Pick<WearableCharacter, 'tauS' | 'windowS' | 'delayS'>): Float64Array {
	const dt = TRUTH_DT_S;
	const n = source.length;
	const averaged = new Float64Array(n);
	const w = Math.max(1, Math.round(character.windowS / dt));
	let sum = 0;
	for (let i = 0; i < n; i++) {
		sum += source[i] - (i >= w ? source[i - w] : 0);
		averaged[i] = sum / Math.min(i + 1, w);
	}
	const delay = Math.round(character.delayS / dt);
	const out = new Float64Array(n);
	let value = averaged[0];
	const keep = character.tauS > 0 ? Math.exp(-dt / character.tauS) : 0;
	const held = new Float64Array(n);
	for (let i = 0; i < n; i++) {
		value = keep * value + (1 - keep) * averaged[i];
		held[i] = value;
	}
	for (let i = 0; i < n; i++) out[i] = held[Math.max(0, i - delay)];
	return out;
}

/** Mean delay of `smoothed` as it is on its grid, s (half a step less than tau and half the window). */
export function delayOf(character: Pick<WearableCharacter, 'tauS' | 'windowS' | 'delayS'>): number {
	const dt = TRUTH_DT_S;
	const window = Math.max(1, Math.round(character.windowS / dt));
	const firstOrder = character.tauS > 0 ? dt / (Math.exp(dt / character.tauS) - 1) : 0;
	return firstOrder + ((window - 1) * dt) / 2 + Math.round(character.delayS / dt) * dt;
}

export function simulateWearable(input: {
	truth: Truth;
	activity: Activity;
	course: Stretch[];
	lengthS: number;
	startS: number;
	character: WearableCharacter;
	reference: { delayS: number; windowS: number };
	random: RandomStream;
}): SimulatedWearable {
	const { truth, activity, course, lengthS, startS, character, reference, random } = input;
	const dt = TRUTH_DT_S;
	const faults = drawFaults(character.faults, activity, course, lengthS, random);
	// The wearer's onset fault begins with the device's own first reading.
	for (const f of faults) if (f.kind === 'onset-delay') {
		f.startS += character.startsLateS;
		f.endS += character.startsLateS;
	}
	const source = truth.heartRateBpm.slice();
	spoilSource(source, faults, truth, random);
	const cleanOutput = smoothed(truth.heartRateBpm, character);
	const faultyOutput = smoothed(source, character);
	const noise = ouNoise(random, truth.n, dt, character.noiseSdBpm, random.uniform(3, 9));

	// t_ref = t_w + offset at the middle + drift from there; inverted for each of the device's own whole seconds.
	const midRefS = startS + lengthS / 2;
	const rate = 1 + character.driftPpm * 1e-6;
	const midOwnS = midRefS - character.clockOffsetS;
	const toReference = (ownS: number) => midRefS + (ownS - midOwnS) * rate;
	const toOwn = (refS: number) => midOwnS + (refS - midRefS) / rate;

	const firstOwnS = Math.ceil(toOwn(startS + 2 + character.startsLateS));
	const lastOwnS = Math.floor(toOwn(startS + lengthS - 1 - character.stopsEarlyS));
	const tS: number[] = [];
	const value: number[] = [];
	const at = (column: Float64Array, trueS: number) => {
		const x = Math.min(column.length - 1, Math.max(0, trueS / dt));
		const i = Math.min(column.length - 2, Math.floor(x));
		return column[i] + (column[i + 1] - column[i]) * (x - i);
	};
	const holds = new Map<Fault, number>();
	for (let own = firstOwnS; own <= lastOwnS; own += character.irregular ? random.whole(1, 8) : 1) {
		const trueS = toReference(own) - startS;
		let reading = at(faultyOutput, trueS) + at(noise, trueS);
		let written = true;
		for (const f of faults) {
			if (trueS < f.startS || trueS >= f.endS) continue;
			if (f.kind === 'hold') {
				if (!holds.has(f)) holds.set(f, Math.round(reading));
				reading = holds.get(f) as number;
			} else if (f.kind === 'dropout') {
				written = false;
			} else if (f.kind === 'spike') reading *= f.factor;
		}
		if (!written) continue;
		tS.push(own);
		value.push(Math.min(235, Math.max(30, Math.round(reading))));
	}

	let cadence: Trace | null = null;
	if (character.recordsCadence && truth.cadencePerMin.some((c) => c > 0)) {
		const own = smoothed(truth.cadencePerMin, { tauS: 0, windowS: random.uniform(1, 5), delayS: random.uniform(0, 1) });
		const jitter = ouNoise(random, truth.n, dt, 1.2, 4);
		const ct: number[] = [];
		const cv: number[] = [];
		for (const t of tS) {
			const trueS = toReference(t) - startS;
			const v = at(own, trueS);
			// A standing wearer's cadence is absent, as in files: a reading of 0 is no reading of a rate.
			if (v < 4) continue;
			ct.push(t);
			cv.push(Math.max(1, Math.round(v + at(jitter, trueS))));
		}
		if (ct.length > 1) cadence = { kind: 'cadence', tS: Float64Array.from(ct), value: Float64Array.from(cv) };
	}

	const deviceDelayS = delayOf(character);
	const responseLagS = deviceDelayS - reference.delayS;
	return {
		heartRate: { kind: 'heartRate', tS: Float64Array.from(tS), value: Float64Array.from(value) },
		cadence,
		character,
		truth: {
			clockOffsetS: character.clockOffsetS,
			driftPpm: character.driftPpm,
			responseLagS,
			totalShiftS: character.clockOffsetS - responseLagS,
			bestFitShiftS: character.clockOffsetS - leastSquaresLag(truth.heartRateBpm, cleanOutput, reference, responseLagS),
			events: faults.map((f) => ({ kind: f.kind, startS: startS + f.startS, endS: startS + f.endS, visible: visibleExtent(f, cleanOutput, faultyOutput, startS) }))
		}
	};
}

/** Where a fault shows: more than 5 bpm between faulty and clean output, from its start until the smoothing has let go. */
function visibleExtent(f: Fault, clean: Float64Array, faulty: Float64Array, startS: number): TruthEvent['visible'] {
	if (f.kind === 'dropout' || f.kind === 'hold' || f.kind === 'spike') return { startS: startS + f.startS, endS: startS + f.endS, meanAbsErrorBpm: f.kind === 'spike' ? 40 : 0 };
	const from = Math.max(0, Math.floor(f.startS / TRUTH_DT_S));
	const to = Math.min(clean.length, Math.ceil((f.endS + 60) / TRUTH_DT_S));
	let first = -1;
	let last = -1;
	let sum = 0;
	let n = 0;
	for (let i = from; i < to; i++) {
		const d = Math.abs(faulty[i] - clean[i]);
		if (d <= 5) continue;
		if (first < 0) first = i;
		if (last >= 0 && i > f.endS / TRUTH_DT_S && (i - last) * TRUTH_DT_S > 5) break;
		last = i;
		sum += d;
		n++;
	}
	return first < 0 ? null : { startS: startS + first * TRUTH_DT_S, endS: startS + (last + 1) * TRUTH_DT_S, meanAbsErrorBpm: sum / n };
}

/** Lag of least squares between the smoothed device and the reference's displayed value, s. */
function leastSquaresLag(heart: Float64Array, device: Float64Array, reference: { delayS: number; windowS: number }, expectedS: number): number {
	const step = TRUTH_DT_S;
	const displayed = smoothed(heart, { tauS: 0, windowS: reference.windowS, delayS: reference.delayS - reference.windowS / 2 });
	const loss = (lagS: number) => {
		const shift = Math.round(lagS / step);
		let sum = 0;
		let n = 0;
		for (let i = 240; i < heart.length; i += 4) {
			const j = i - shift;
			if (j < 0 || j >= heart.length) continue;
			sum += (device[i] - displayed[j]) ** 2;
			n++;
		}
		return n > 0 ? sum / n : Infinity;
	};
	let best = Math.round(expectedS / step) * step;
	let bestLoss = Infinity;
	for (let lag = best - 6; lag <= best + 6; lag += step) {
		const l = loss(lag);
		if (l < bestLoss) {
			bestLoss = l;
			best = lag;
		}
	}
	const [a, b, c] = [loss(best - step), bestLoss, loss(best + step)];
	const curve = a - 2 * b + c;
	return curve > 0 && Number.isFinite(curve) ? best + (0.5 * step * (a - c)) / curve : best;
}

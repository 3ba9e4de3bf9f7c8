/** How simulated wearables fail: kinds, how often, how long, and what they do to the readings. */
import { CADENCE, type Activity, type Stretch } from './course';
import { TRUTH_DT_S, type Truth } from './heart';
import { ouNoise, type RandomStream } from './random';

export type FaultKind = 'onset-delay' | 'half-rate' | 'double-rate' | 'cadence-lock' | 'missed-peak' | 'motion-artefact' | 'hold' | 'dropout' | 'spike';

export interface Fault {
	kind: FaultKind;
	/** True time from the session's start, s. */
	startS: number;
	endS: number;
	/** Kind's own number: harmonic of a lock, level of a hold, factor of a spike. */
	factor: number;
	/** Dropout written as zeros instead of missing readings. */
	zeros: boolean;
}

/** Probability per try of each kind; a kind is tried once per 20 minutes at least (missed peaks: share of sets). */
export type FaultRates = Record<FaultKind, number>;

export const NO_FAULTS: FaultRates = { 'onset-delay': 0, 'half-rate': 0, 'double-rate': 0, 'cadence-lock': 0, 'missed-peak': 0, 'motion-artefact': 0, hold: 0, dropout: 0, spike: 0 };

/** Typical rates of an activity: feet lock more than pedals, strength and outdoor rides shake more. Common practice, no source. */
export function typicalFaults(activity: Activity, random: RandomStream): FaultRates {
	const onFoot = CADENCE[activity].onFoot && CADENCE[activity].base > 0;
	const shaken = activity === 'strength' || activity === 'hiit' || activity === 'ride-outdoor' || activity === 'commute';
	return {
		'onset-delay': 0.3,
		'half-rate': 0.16,
		'double-rate': 0.06,
		'cadence-lock': CADENCE[activity].base === 0 ? 0 : onFoot ? 0.4 : 0.08,
		'missed-peak': activity === 'strength' || activity === 'hiit' ? random.uniform(0, 0.45) : 0,
		'motion-artefact': shaken ? 0.5 : 0.28,
		hold: 0.25,
		dropout: 0.25,
		spike: 0.3
	};
}

export function scaledFaults(rates: FaultRates, by: number): FaultRates {
	return Object.fromEntries(Object.entries(rates).map(([kind, rate]) => [kind, Math.min(0.95, rate * by)])) as FaultRates;
}

/** No fault takes more than this share of the session. */
const LARGEST_SHARE = 0.2;

/** Draws the faults of one wearable in one session; faults of one wearable do not overlap. */
export function drawFaults(rates: FaultRates, activity: Activity, course: Stretch[], lengthS: number, random: RandomStream): Fault[] {
	const faults: Fault[] = [];
	const free = (startS: number, endS: number) => faults.every((f) => endS + 20 <= f.startS || startS >= f.endS + 20);
	const place = (kind: FaultKind, wantedS: number, extra: Partial<Fault> = {}, near?: Stretch[]) => {
		const length = Math.min(wantedS, lengthS * LARGEST_SHARE);
		for (let attempt = 0; attempt < 12; attempt++) {
			const around = near?.length ? random.pick(near) : null;
			const startS = around ? random.uniform(around.startS, around.startS + around.lengthS * 0.8) : random.uniform(60, lengthS - length - 30);
			if (startS < 30 || startS + length > lengthS - 10 || !free(startS, startS + length)) continue;
			faults.push({ kind, startS, endS: startS + length, factor: 1, zeros: false, ...extra });
			return;
		}
	};
	const tries = Math.max(1, Math.round(lengthS / 1200));
	if (random.chance(rates['onset-delay'])) faults.push({ kind: 'onset-delay', startS: 0, endS: Math.min(random.uniform(35, 150), lengthS * LARGEST_SHARE), factor: random.chance(0.5) ? random.uniform(-38, -14) : random.uniform(14, 38), zeros: false });
	const moving = course.filter((c) => c.moving === 1 && c.lengthS > 30);
	const working = course.filter((c) => c.kind === 'work' || c.kind === 'set');
	for (let k = 0; k < tries; k++) {
		if (random.chance(rates['half-rate'])) place('half-rate', random.uniform(20, 180));
		if (random.chance(rates['double-rate'])) place('double-rate', random.uniform(15, 90), {}, course.filter((c) => c.kind === 'break' || c.kind === 'still' || c.kind === 'warm-up'));
		if (random.chance(rates['cadence-lock'])) place('cadence-lock', random.logUniform(30, 400), { factor: CADENCE[activity].onFoot ? random.pick([1, 1, 1, 0.5]) : random.pick([1, 2]) }, moving);
		if (random.chance(rates['motion-artefact'])) place('motion-artefact', random.uniform(8, 45), {}, working);
		if (random.chance(rates.hold)) place('hold', random.uniform(15, 90));
		if (random.chance(rates.dropout)) place('dropout', 8 + random.exponential(40), { zeros: random.chance(0.4) });
		if (random.chance(rates.spike)) place('spike', random.uniform(1, 3), { factor: random.chance(0.5) ? random.uniform(0.5, 0.75) : random.uniform(1.25, 1.6) });
	}
	if (rates['missed-peak'] > 0)
		for (const c of working)
			if (random.chance(rates['missed-peak']) && free(c.startS, c.startS + c.lengthS + 25)) faults.push({ kind: 'missed-peak', startS: c.startS, endS: c.startS + c.lengthS + 25, factor: random.uniform(0.08, 0.3), zeros: false });
	return faults.sort((a, b) => a.startS - b.startS);
}

/** Faults that act on what the sensor sees, before the device smooths it. Changes `source` in place. */
export function spoilSource(source: Float64Array, faults: Fault[], truth: Truth, random: RandomStream): void {
	for (const f of faults) {
		const from = Math.max(0, Math.round(f.startS / TRUTH_DT_S));
		const to = Math.min(source.length, Math.round(f.endS / TRUTH_DT_S));
		if (to <= from) continue;
		switch (f.kind) {
			case 'onset-delay':
				for (let i = from; i < to; i++) source[i] = Math.max(45, source[i] + f.factor * (1 - (0.4 * (i - from)) / (to - from)));
				break;
			case 'half-rate':
				for (let i = from; i < to; i++) source[i] *= 0.5;
				break;
			case 'double-rate':
				for (let i = from; i < to; i++) source[i] = Math.min(225, source[i] * 2);
				break;
			case 'cadence-lock':
				for (let i = from; i < to; i++) if (truth.cadencePerMin[i] > 0) source[i] = Math.min(225, truth.cadencePerMin[i] * f.factor);
				break;
			case 'missed-peak': {
				const base = source[from];
				for (let i = from; i < to; i++) source[i] = source[i] > base ? base + (source[i] - base) * f.factor : source[i];
				break;
			}
			case 'motion-artefact': {
				const shake = ouNoise(random, to - from, TRUTH_DT_S, random.uniform(14, 32), random.uniform(2, 5));
				for (let i = from; i < to; i++) source[i] = Math.min(225, Math.max(35, source[i] + shake[i - from]));
				break;
			}
		}
	}
}

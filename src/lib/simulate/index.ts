/**
 * A training session with known truth: one wearer, a reference and any number of wearables on clocks of their own.
 *
 * Times. The reference's clock is true time. A wearable's stamps are on its own clock;
 * t_reference = t_wearable + clockOffsetS at the middle of the session, drifting by driftPpm from there. All truth
 * (events, stretches) stands on the reference's clock, epoch seconds.
 */
import type { Trace } from '../formats/recording';
import { drawCourse, USUAL_LENGTH_S, type Activity, type Stretch } from './course';
import { NO_FAULTS, scaledFaults, typicalFaults } from './faults';
import { simulateTruth, TRUTH_DT_S, type Truth } from './heart';
import { ouNoise, randomStream, type RandomStream } from './random';
import { simulateReference, type ReferenceFault } from './reference';
import { simulateWearable, smoothed, type SimulatedWearable, type WearableCharacter } from './wearable';

export { ACTIVITIES, type Activity, type Stretch } from './course';
export { NO_FAULTS, typicalFaults, type FaultKind, type FaultRates } from './faults';
export type { SimulatedWearable, TruthEvent, WearableCharacter, WearableTruth } from './wearable';
export { randomStream } from './random';

/** none: no lag, no faults. lag: devices smooth. typical: lag and ordinary faults. heavy: 2.5 times as many. */
export type Preset = 'none' | 'lag' | 'typical' | 'heavy';

export interface SessionRequest {
	seed: number;
	activity: Activity;
	/** Length, s; drawn from the activity's usual range when left out. */
	durationS?: number;
	preset?: Preset;
	/** Start on the reference's clock, epoch s (whole). */
	startS?: number;
	/** How many wearables, or what is fixed of each. Default 1. */
	wearables?: number | Partial<WearableCharacter>[];
	wearer?: { restBpm: number; maxBpm: number };
	/** Spoil the strap's first minutes or not; drawn by preset when left out. */
	referenceFault?: boolean;
}

export interface SimulatedSession {
	activity: Activity;
	startS: number;
	durationS: number;
	reference: { heartRate: Trace; rrInterval: Trace; cadence: Trace | null; speed: Trace | null; delayS: number; faults: ReferenceFault[] };
	wearables: SimulatedWearable[];
	/** Course of the session, on the reference's clock. */
	course: Stretch[];
	truth: Truth;
}

const DEFAULT_START_S = Date.UTC(2026, 9, 14, 7, 31) / 1000;

/** Simulates one session. Same request, same result, on every machine. */
export function simulateSession(request: SessionRequest): SimulatedSession {
	const { seed, activity } = request;
	const preset = request.preset ?? 'typical';
	const [shortest, longest] = USUAL_LENGTH_S[activity];
	const durationS = Math.round(request.durationS ?? randomStream(seed, 'length').logUniform(shortest, longest));
	const startS = request.startS ?? DEFAULT_START_S;
	const course = drawCourse(activity, durationS, randomStream(seed, 'course'));
	const truth = simulateTruth(seed, activity, course, durationS, request.wearer);
	const strap = randomStream(seed, 'reference');
	const faulty = request.referenceFault ?? ((preset === 'typical' && strap.chance(0.3)) || (preset === 'heavy' && strap.chance(0.6)));
	const reference = simulateReference(truth, startS, strap, faulty);

	const wanted = request.wearables ?? 1;
	const characters: Partial<WearableCharacter>[] = typeof wanted === 'number' ? Array.from({ length: wanted }, () => ({})) : wanted;
	const wearables = characters.map((fixed, index) => {
		const random = randomStream(seed, `wearable ${index}`);
		const character = { ...drawCharacter(preset, activity, random), ...fixed };
		return simulateWearable({ truth, activity, course, lengthS: durationS, startS, character, reference, random: randomStream(seed, `wearable ${index} readings`) });
	});

	return {
		activity,
		startS,
		durationS,
		reference: {
			heartRate: reference.heartRate,
			rrInterval: reference.rrInterval,
			...movement(truth, startS, randomStream(seed, 'reference movement')),
			delayS: reference.delayS,
			faults: reference.faults
		},
		wearables,
		course: course.map((c) => ({ ...c, startS: startS + c.startS })),
		truth
	};
}

/** Clocks: half within 10 s, a third within 2 min, the rest within an hour; one in eight with a zone mistake. */
function drawCharacter(preset: Preset, activity: Activity, random: RandomStream): WearableCharacter {
	const way = random.unit();
	const zone = random.chance(0.12) ? 1800 * random.whole(-24, 28) : 0;
	const clockOffsetS = (way < 0.5 ? random.uniform(-10, 10) : way < 0.8 ? random.uniform(-120, 120) : random.uniform(-3600, 3600)) + zone;
	const driftPpm = random.chance(0.7) ? 20 * random.normal() : random.uniform(-100, 100);
	const lag = random.pick(['first order', 'average', 'both'] as const);
	const smoothing =
		preset === 'none'
			? { tauS: 0, windowS: 0, delayS: 0 }
			: {
					tauS: lag === 'average' ? 0 : lag === 'both' ? random.uniform(2, 8) : random.uniform(2, 15),
					windowS: lag === 'first order' ? 0 : lag === 'both' ? random.uniform(5, 10) : random.uniform(5, 20),
					delayS: random.uniform(0, 2)
				};
	const typical = typicalFaults(activity, random);
	return {
		...smoothing,
		noiseSdBpm: random.uniform(0.3, 1.3),
		faults: preset === 'typical' ? typical : preset === 'heavy' ? scaledFaults(typical, 2.5) : NO_FAULTS,
		clockOffsetS,
		driftPpm,
		irregular: preset !== 'none' && random.chance(0.25),
		startsLateS: random.uniform(0, 90),
		stopsEarlyS: random.uniform(0, 90),
		recordsCadence: true
	};
}

/** Cadence and speed as the reference's recorder writes them; null where the activity has none. */
function movement(truth: Truth, startS: number, random: RandomStream): { cadence: Trace | null; speed: Trace | null } {
	if (!truth.cadencePerMin.some((c) => c > 0)) return { cadence: null, speed: null };
	const jitter = ouNoise(random, truth.n, TRUTH_DT_S, 1.2, 4);
	const cadence = smoothed(truth.cadencePerMin, { tauS: 0, windowS: random.uniform(1, 5), delayS: random.uniform(0, 1) });
	const speed = smoothed(truth.speedMS, { tauS: 0, windowS: random.uniform(1, 4), delayS: random.uniform(0, 1) });
	const column = (kind: 'cadence' | 'speed', values: Float64Array, lowest: number, write: (v: number, i: number) => number): Trace | null => {
		const t: number[] = [];
		const v: number[] = [];
		for (let s = 2; s < (truth.n - 1) * TRUTH_DT_S; s++) {
			const i = Math.round(s / TRUTH_DT_S);
			if (values[i] < lowest) continue;
			t.push(startS + s);
			v.push(write(values[i], i));
		}
		return t.length > 1 ? { kind, tS: Float64Array.from(t), value: Float64Array.from(v) } : null;
	};
	return {
		cadence: column('cadence', cadence, 4, (c, i) => Math.max(1, Math.round(c + jitter[i]))),
		speed: column('speed', speed, 0.15, (s) => Math.round(s * 1000) / 1000)
	};
}

/**
 * A simulated wearable on top of a heart rate that was recorded: what the wearable adds is known, the heart is real.
 *
 * The recorded values count as the heart itself, so a wearable without smoothing has no response lag.
 * @param request.heartRate one reading a second without gaps, bpm
 */
export function wearableOnRealHeart(request: { seed: number; heartRate: Trace; preset: Preset; activity?: Activity; character?: Partial<WearableCharacter> }): SimulatedWearable {
	const { seed, heartRate, preset } = request;
	const activity = request.activity ?? 'ride-outdoor';
	const lengthS = heartRate.tS.length - 1;
	const n = Math.floor(lengthS / TRUTH_DT_S) + 1;
	const column = Float64Array.from({ length: n }, (_, i) => {
		const x = i * TRUTH_DT_S;
		const k = Math.min(heartRate.value.length - 2, Math.floor(x));
		return heartRate.value[k] + (heartRate.value[k + 1] - heartRate.value[k]) * (x - k);
	});
	const none = new Float64Array(n);
	const truth: Truth = { n, heartRateBpm: column, cadencePerMin: none, speedMS: none, intensity: none, restBpm: Math.min(...heartRate.value), maxBpm: Math.max(...heartRate.value) };
	const character = { ...drawCharacter(preset, activity, randomStream(seed, 'wearable 0')), ...request.character };
	return simulateWearable({
		truth,
		activity,
		course: [{ startS: 0, lengthS, from: 0.5, to: 0.5, kind: 'work', moving: 1, word: 'Recorded' }],
		lengthS,
		startS: heartRate.tS[0],
		character,
		reference: { delayS: 0, windowS: 0 },
		random: randomStream(seed, 'wearable 0 readings')
	});
}

/** The wearer's heart and movement: the truth that every device of the session observes. */
import { CADENCE, type Activity, type Stretch } from './course';
import { ouNoise, randomStream } from './random';

/** Grid of the truth, s. */
export const TRUTH_DT_S = 0.25;

export interface Truth {
	/** Samples on the grid from 0 s. */
	n: number;
	heartRateBpm: Float64Array;
	/** Both feet or crank turns a minute; 0 while standing; all 0 where the activity has none. */
	cadencePerMin: Float64Array;
	speedMS: Float64Array;
	intensity: Float64Array;
	restBpm: number;
	maxBpm: number;
}

/** Speed while moving, m/s: at no intensity and gain per unit. */
const SPEED: Record<Activity, [number, number]> = {
	'run-steady': [1.9, 1.9], 'run-intervals': [1.8, 2.8], 'hill-run': [1.7, 1.4], 'ride-indoor': [5, 5], 'ride-outdoor': [4, 6],
	commute: [3.5, 4], strength: [0, 0], hiit: [0, 0], walk: [1.1, 0.9], rest: [0, 0], rowing: [2.2, 2.2]
};

/**
 * Heart rate as rest + reserve × (fast part + slow part + drift), driven by the course's intensity with pacing and
 * terrain noise; breathing and slow waves on top, both shrinking as the rate rises. Time constants: common practice,
 * compare the two-phase responses in Biomed Eng Online 2021, 10.1186/s12938-021-00875-7.
 */
export function simulateTruth(seed: number, activity: Activity, course: Stretch[], lengthS: number, wearer?: { restBpm: number; maxBpm: number }): Truth {
	const dt = TRUTH_DT_S;
	const n = Math.floor(lengthS / dt) + 1;
	const person = randomStream(seed, 'person');
	const drawnRest = person.uniform(48, 72);
	const drawnMax = person.uniform(172, 200);
	const restBpm = wearer?.restBpm ?? drawnRest;
	const maxBpm = wearer?.maxBpm ?? drawnMax;
	const fastShare = person.uniform(0.15, 0.33);
	const tauFast = person.uniform(7, 14);
	const deadS = person.uniform(0, 8);
	const quick = activity === 'strength' ? 0.7 : 1;
	const tauOn = person.uniform(22, 60) * quick;
	const tauOff = person.uniform(25, 75) * quick;
	const driftPerHour = person.uniform(0, 0.09);

	const noise = randomStream(seed, 'pacing');
	const steady = activity === 'ride-indoor' || activity === 'run-steady' || activity === 'walk' || activity === 'rowing';
	const pacing = ouNoise(noise, n, dt, activity === 'rest' ? 0.004 : steady ? noise.uniform(0.006, 0.018) : noise.uniform(0.012, 0.035), noise.uniform(15, 60));
	const terrain = ouNoise(noise, n, dt, activity === 'ride-outdoor' || activity === 'commute' ? noise.uniform(0.02, 0.05) : activity === 'rest' ? 0.004 : noise.uniform(0.006, 0.02), 150);

	const intensity = new Float64Array(n);
	const moving = new Float64Array(n);
	let s = 0;
	for (let i = 0; i < n; i++) {
		const t = i * dt;
		while (s < course.length - 1 && t >= course[s].startS + course[s].lengthS) s++;
		const c = course[s];
		const along = Math.min(1, Math.max(0, (t - c.startS) / c.lengthS));
		const level = c.from + (c.to - c.from) * along;
		moving[i] = c.moving;
		intensity[i] = Math.min(1.05, Math.max(0, level + (c.moving > 0 || activity === 'rest' ? pacing[i] + terrain[i] : 0)));
	}

	const heartRateBpm = new Float64Array(n);
	const variability = randomStream(seed, 'variability');
	const breathAmplitude = variability.uniform(2.4, 4);
	const waveAmplitude = variability.uniform(1.6, 2.8);
	const breathHz = ouNoise(variability, n, dt, 0.02, 40);
	const waveHz = ouNoise(variability, n, dt, 0.012, 40);
	const slowNoise = ouNoise(variability, n, dt, variability.uniform(0.9, 1.7), 20);
	const quickNoise = ouNoise(variability, n, dt, variability.uniform(0.35, 0.75), 3);
	let fast = intensity[0];
	let slow = intensity[0];
	let drift = 0;
	let breathPhase = variability.uniform(0, 6.28);
	let wavePhase = variability.uniform(0, 6.28);
	const dead = Math.round(deadS / dt);
	for (let i = 0; i < n; i++) {
		const u = intensity[i];
		const delayed = intensity[Math.max(0, i - dead)];
		fast += ((u - fast) * dt) / (u > fast ? tauFast : tauFast * 1.4);
		slow += ((delayed - slow) * dt) / (delayed > slow ? tauOn : tauOff);
		drift += (driftPerHour / 3600) * u * dt;
		const clean = restBpm + (maxBpm - restBpm) * (fastShare * fast + (1 - fastShare) * slow + drift);
		breathPhase += 2 * Math.PI * (0.2 + 0.32 * slow + breathHz[i]) * dt;
		wavePhase += 2 * Math.PI * (0.1 + waveHz[i]) * dt;
		const shrink = Math.min(1.4, Math.exp(-(clean - 60) / 60));
		heartRateBpm[i] = Math.min(
			maxBpm + 6,
			Math.max(
				36,
				clean +
					breathAmplitude * Math.exp(-(clean - 60) / 28) * Math.sin(breathPhase) +
					waveAmplitude * Math.exp(-(clean - 60) / 40) * Math.sin(wavePhase) +
					(slowNoise[i] + quickNoise[i]) * (0.35 + 0.65 * shrink)
			)
		);
	}

	const stride = CADENCE[activity];
	const cadencePerMin = new Float64Array(n);
	const speedMS = new Float64Array(n);
	if (stride.base > 0) {
		const step = ouNoise(randomStream(seed, 'cadence'), n, dt, 1.6, 20);
		const wheel = ouNoise(randomStream(seed, 'speed'), n, dt, 0.12, 15);
		const [speedBase, speedGain] = SPEED[activity];
		let c = 0;
		let v = 0;
		const answer = 1 - Math.exp(-dt / 0.8);
		for (let i = 0; i < n; i++) {
			const cadenceTarget = moving[i] === 0 ? 0 : (stride.base + stride.gain * intensity[i]) * (moving[i] === 0.5 ? 0.5 : 1) + step[i];
			const speedTarget = moving[i] === 0 ? 0 : (speedBase + speedGain * intensity[i]) * (moving[i] === 0.5 ? 0.7 : 1) * (1 + wheel[i]);
			c += (cadenceTarget - c) * answer;
			v += (speedTarget - v) * answer * 0.5;
			cadencePerMin[i] = c < 4 ? 0 : c;
			speedMS[i] = v < 0.15 ? 0 : v;
		}
	}
	return { n, heartRateBpm, cadencePerMin, speedMS, intensity, restBpm, maxBpm };
}

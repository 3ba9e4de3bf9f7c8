/** The course of a session: what the wearer does, stretch by stretch. */
import type { RandomStream } from './random';

export const ACTIVITIES = ['run-steady', 'run-intervals', 'ride-indoor', 'ride-outdoor', 'commute', 'strength', 'hiit', 'walk', 'rest', 'rowing', 'hill-run'] as const;
export type Activity = (typeof ACTIVITIES)[number];

export interface Stretch {
	startS: number;
	lengthS: number;
	/** Intensity as a fraction of heart-rate reserve at its start and end. */
	from: number;
	to: number;
	kind: 'work' | 'easy' | 'set' | 'break' | 'still' | 'warm-up' | 'cool-down';
	/** Moving at all, half, or wholly: what cadence and speed follow. */
	moving: 0 | 0.5 | 1;
	/** Word for the strip: `Climb 3`. */
	word: string;
}

/** Usual length of a session, s, from which one is drawn evenly in the logarithm. */
export const USUAL_LENGTH_S: Record<Activity, [number, number]> = {
	'run-steady': [1500, 5400],
	'run-intervals': [1500, 4200],
	'ride-indoor': [1500, 5400],
	'ride-outdoor': [2400, 10800],
	commute: [900, 3000],
	strength: [1500, 4200],
	hiit: [1200, 2700],
	walk: [1200, 5400],
	rest: [600, 2400],
	rowing: [1200, 3600],
	'hill-run': [1800, 4200]
};

/** Movement rate while moving, 1/min: level at no intensity, gain per unit of intensity. Zero = none recorded. */
export const CADENCE: Record<Activity, { base: number; gain: number; onFoot: boolean }> = {
	'run-steady': { base: 158, gain: 12, onFoot: true },
	'run-intervals': { base: 160, gain: 14, onFoot: true },
	'hill-run': { base: 158, gain: 12, onFoot: true },
	'ride-indoor': { base: 80, gain: 14, onFoot: false },
	'ride-outdoor': { base: 76, gain: 14, onFoot: false },
	commute: { base: 74, gain: 12, onFoot: false },
	strength: { base: 0, gain: 0, onFoot: true },
	hiit: { base: 120, gain: 14, onFoot: true },
	walk: { base: 104, gain: 12, onFoot: true },
	rest: { base: 0, gain: 0, onFoot: true },
	rowing: { base: 20, gain: 10, onFoot: false }
};

/** Draws the course of one session. Lengths in s; covers the whole session without gaps. */
export function drawCourse(activity: Activity, lengthS: number, random: RandomStream): Stretch[] {
	const course: Stretch[] = [];
	let t = 0;
	const add = (lengthWanted: number, from: number, to: number, kind: Stretch['kind'], moving: Stretch['moving'], word: string) => {
		const length = Math.min(lengthWanted, lengthS - t);
		if (length <= 0) return;
		course.push({ startS: t, lengthS: length, from, to, kind, moving, word });
		t += length;
	};
	const stop = (low: number, high: number, word = 'Stop') => add(random.logUniform(low, high), 0.06, 0.03, 'break', 0, word);
	const coolDownS = Math.min(300, lengthS * 0.1);

	if (activity === 'rest') {
		while (t < lengthS) add(random.uniform(180, 500), random.uniform(0, 0.05), random.uniform(0, 0.05), 'still', 0, 'Rest');
		return course;
	}
	add(random.uniform(120, 420) * (lengthS < 1500 ? 0.5 : 1), 0.12, random.uniform(0.32, 0.45), 'warm-up', 1, 'Warm-up');
	let count = 0;
	while (t < lengthS - coolDownS) {
		count++;
		switch (activity) {
			case 'run-steady': {
				const level = random.uniform(0.58, 0.75);
				add(random.uniform(400, 1200), level, level + random.uniform(-0.03, 0.05), 'work', 1, 'Steady');
				if (random.chance(0.45)) stop(8, 50);
				break;
			}
			case 'ride-indoor': {
				const level = random.uniform(0.5, 0.74);
				add(random.uniform(240, 900), level, level + random.uniform(-0.03, 0.04), 'work', 1, `Block ${count}`);
				if (random.chance(0.3)) stop(10, 60, 'Pause');
				break;
			}
			case 'walk': {
				const level = random.uniform(0.22, 0.38);
				add(random.uniform(300, 900), level, level + random.uniform(-0.03, 0.04), 'work', 1, 'Walk');
				if (random.chance(0.5)) stop(10, 90);
				break;
			}
			case 'run-intervals': {
				add(random.logUniform(30, 240), random.uniform(0.82, 0.97), random.uniform(0.84, 0.97), 'work', 1, `Interval ${count}`);
				const still = random.chance(0.3);
				add(random.uniform(30, 120), still ? 0.12 : 0.38, still ? 0.08 : 0.34, still ? 'break' : 'easy', still ? 0 : 1, 'Recovery');
				break;
			}
			case 'hill-run': {
				add(random.uniform(110, 210), random.uniform(0.84, 0.93), random.uniform(0.9, 0.97), 'work', 1, `Climb ${count}`);
				add(random.uniform(70, 130), 0.45, 0.4, 'easy', 1, 'Jog down');
				add(random.uniform(25, 60), 0.08, 0.05, 'break', 0, 'Stand');
				break;
			}
			case 'rowing': {
				add(random.uniform(240, 540), random.uniform(0.68, 0.8), random.uniform(0.74, 0.88), 'work', 1, `Piece ${count}`);
				add(random.uniform(60, 150), 0.2, 0.12, 'break', random.chance(0.5) ? 0.5 : 0, 'Easy');
				break;
			}
			case 'ride-outdoor': {
				const level = random.uniform(0.38, 0.85);
				add(random.logUniform(60, 600), level, level + random.uniform(-0.05, 0.06), 'work', 1, 'Ride');
				if (random.chance(0.25)) add(random.uniform(20, 120), 0.2, 0.15, 'easy', 0.5, 'Coast');
				if (random.chance(0.3)) stop(8, 90);
				break;
			}
			case 'commute': {
				const level = random.uniform(0.35, 0.7);
				add(random.logUniform(40, 300), level, level + random.uniform(-0.05, 0.05), 'work', 1, 'Ride');
				if (random.chance(0.65)) stop(10, 80, 'Light');
				break;
			}
			case 'strength': {
				add(random.uniform(20, 55), random.uniform(0.55, 0.9), random.uniform(0.65, 0.95), 'set', 0.5, `Set ${count}`);
				add(random.uniform(60, 170), 0.15, 0.08, 'break', 0, 'Rest');
				break;
			}
			case 'hiit': {
				add(random.uniform(20, 60), random.uniform(0.85, 1), random.uniform(0.88, 1), 'work', 1, `Bout ${count}`);
				add(random.uniform(15, 70), 0.3, 0.2, 'break', random.chance(0.6) ? 0 : 0.5, 'Rest');
				break;
			}
		}
	}
	add(lengthS, 0.3, 0.1, 'cool-down', activity === 'strength' ? 0 : 1, 'Cool-down');
	return course;
}

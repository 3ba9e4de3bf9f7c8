/** Do stated 95 % intervals hold the truth 95 times in 100? Simulated with a fixed seed, the truth known. */
import { describe, expect, it } from 'vitest';
import { isDetermined, type Interval } from './determinable';
import { figuresOfSessions } from './figures';
import { gaussian, sfc32, uniform } from './random';
import { sumSession } from './sessions';

const STUDIES = 500;
/** Three standard errors of a share of 95 % in 500 studies are 2.9 points. */
const AROUND = [0.92, 0.98] as const;

interface World {
	sessions: number;
	readings: (next: () => number) => number;
	between: number;
	within: number;
	/** Correlation of one second's error with the next. */
	memory: number;
}

function coverage(world: World, seed: number): Record<'bias' | 'lower' | 'upper' | 'ccc' | 'mae' | 'rmse', number> {
	const next = sfc32(seed);
	const bias = 1;
	const sd = Math.hypot(world.between, world.within);
	const square = bias ** 2 + sd ** 2;
	// Mean of |d| of a normal d (Leone FC, Nelson LS, Nottingham RB 1961, folded normal), by numbers.
	let absolute = 0;
	for (let z = -8; z < 8; z += 0.001)
		absolute +=
			(Math.abs(bias + sd * (z + 0.0005)) * Math.exp(-((z + 0.0005) ** 2) / 2) * 0.001) / Math.sqrt(2 * Math.PI);
	const truth = {
		bias,
		lower: bias - 1.96 * sd,
		upper: bias + 1.96 * sd,
		ccc: 800 / (800 + square),
		mae: absolute,
		rmse: Math.sqrt(square)
	};
	const held = { bias: 0, lower: 0, upper: 0, ccc: 0, mae: 0, rmse: 0 };
	for (let study = 0; study < STUDIES; study++) {
		const sessions = Array.from({ length: world.sessions }, (_, s) => {
			const n = world.readings(next);
			const reference = new Float64Array(n);
			const wearable = new Float64Array(n);
			const shift = bias + world.between * gaussian(next);
			let error = gaussian(next);
			for (let i = 0; i < n; i++) {
				reference[i] = 130 + 20 * gaussian(next);
				wearable[i] = reference[i] + shift + world.within * error;
				error = world.memory * error + Math.sqrt(1 - world.memory ** 2) * gaussian(next);
			}
			return sumSession({ session: `S${s}`, reference, wearable });
		});
		const f = figuresOfSessions(sessions);
		const intervals: Record<keyof typeof held, Interval> = {
			bias: f.biasCi95,
			lower: f.loaLowerCi95,
			upper: f.loaUpperCi95,
			ccc: f.cccCi95,
			mae: f.maeCi95,
			rmse: f.rmseCi95
		};
		for (const key of Object.keys(held) as (keyof typeof held)[]) {
			const interval = intervals[key];
			if (isDetermined(interval) && interval[0] <= truth[key] && truth[key] <= interval[1]) held[key]++;
		}
	}
	return Object.fromEntries(Object.entries(held).map(([key, count]) => [key, count / STUDIES])) as typeof held;
}

describe('coverage of stated 95 % intervals', () => {
	it.each<[string, World]>([
		[
			'twelve sessions of one length that differ',
			{ sessions: 12, readings: () => 40, between: 3, within: 4, memory: 0 }
		],
		[
			'twelve sessions of uneven length',
			{ sessions: 12, readings: (next) => 10 + Math.floor(90 * uniform(next)), between: 3, within: 4, memory: 0 }
		],
		[
			'seconds that follow each other closely',
			{ sessions: 20, readings: () => 50, between: 2, within: 6, memory: 0.9 }
		],
		['one reading a session', { sessions: 24, readings: () => 1, between: 2, within: 4, memory: 0 }]
	])('%s', (_, world) => {
		for (const [figure, share] of Object.entries(coverage(world, 20))) {
			expect(share, figure).toBeGreaterThanOrEqual(AROUND[0]);
			expect(share, figure).toBeLessThanOrEqual(AROUND[1]);
		}
	});
});

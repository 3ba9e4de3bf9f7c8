/** Dropouts: no readings for longer than the device's own rhythm explains. */
import type { Trace } from '../../formats/recording';
import { asScore, rising, type Proposal } from './proposal';
import { duration } from './words';

const SHORTEST_S = 6;
/** A gap must be longer than these multiples of the p95 and the median of the steps between readings. */
const OF_P95 = 1.4;
const OF_MEDIAN = 3;
/** Fewer readings than this show no rhythm. */
const LEAST_READINGS = 20;

export function dropouts(trace: Pick<Trace, 'tS'>, on: Proposal['on']): Proposal[] {
	const { tS } = trace;
	if (tS.length < LEAST_READINGS) return [];
	const steps = new Float64Array(tS.length - 1);
	for (let i = 0; i < steps.length; i++) steps[i] = tS[i + 1] - tS[i];
	const sorted = steps.slice().sort();
	const usualS = sorted[sorted.length >> 1];
	const p95S = sorted[Math.floor(0.95 * (sorted.length - 1))];
	const longestUsualS = Math.max(SHORTEST_S, OF_P95 * p95S, OF_MEDIAN * usualS);
	const found: Proposal[] = [];
	for (let i = 0; i < steps.length; i++)
		if (steps[i] > longestUsualS)
			found.push({
				kind: 'dropout',
				on,
				startS: tS[i] + Math.min(usualS, 1),
				endS: tS[i + 1],
				score: asScore(0.6 + 0.4 * rising(steps[i] / longestUsualS, 1, 1)),
				evidence: `No reading for ${duration(steps[i])}; usually one comes every ${duration(usualS)}.`
			});
	return found;
}

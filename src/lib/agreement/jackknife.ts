/** Intervals by leaving out one cluster at a time, for figures without a formula that respects clusters. */
import { ONE_CLUSTER } from './cluster-mean';
import { isDetermined, notDeterminable, type Figure, type Interval } from './determinable';
import { studentQuantile } from './distributions';
import { leaveOneOut, type PairMoments } from './sums';

/** A scale on which the figure is nearer to normal, and the way back. */
export interface Scale {
	forward: (value: number) => number;
	back: (value: number) => number;
}

const PLAIN: Scale = { forward: (v) => v, back: (v) => v };

/**
 * Interval of a figure from its values without each cluster, Student's t with k − 1 degrees of freedom.
 *
 * @param whole moments of all pairs
 * @param clusters moments of each independent unit, k ≥ 2
 * @param statistic the figure from moments
 * @param scale where the interval is symmetric
 * @see Miller RG (1974) Biometrika 61:1-15
 */
export function jackknifeInterval(
	whole: PairMoments,
	clusters: readonly PairMoments[],
	statistic: (moments: PairMoments) => Figure,
	scale: Scale = PLAIN,
	confidence = 0.95
): Interval {
	const k = clusters.length;
	if (k < 2) return notDeterminable(k === 0 ? 'There are no pairs.' : ONE_CLUSTER);
	const centre = statistic(whole);
	if (!isDetermined(centre)) return centre;
	const values: number[] = [];
	for (const rest of leaveOneOut(clusters)) {
		const value = statistic(rest);
		if (!isDetermined(value))
			return notDeterminable(
				'The figure hangs on a single session: without it there is none, so there is no interval.'
			);
		values.push(scale.forward(value));
	}
	const mean = values.reduce((sum, v) => sum + v, 0) / k;
	const spread = values.reduce((sum, v) => sum + (v - mean) ** 2, 0);
	const reach = studentQuantile(1 - (1 - confidence) / 2, k - 1) * Math.sqrt((spread * (k - 1)) / k);
	const middle = scale.forward(centre);
	if (!Number.isFinite(middle) || !Number.isFinite(reach))
		return notDeterminable('There is no spread to judge an interval by.');
	return [scale.back(middle - reach), scale.back(middle + reach)];
}

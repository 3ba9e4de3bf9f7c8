/** Closeness to the line of identity: Lin's concordance correlation coefficient and its interval. */
import { isDetermined, notDeterminable, type Figure, type Interval } from './determinable';
import { normalQuantile } from './distributions';
import { jackknifeInterval } from './jackknife';
import { pearsonR } from './correlation';
import type { PairMoments } from './sums';

/**
 * Concordance correlation coefficient, with variances over n.
 * @see Lin LI (1989) Biometrics 45:255-268
 */
export function concordance(s: PairMoments): Figure {
	if (s.n < 2) return notDeterminable('Concordance needs at least two pairs.');
	const spread = s.squaresReference + s.squaresWearable + s.n * s.meanDifference ** 2;
	return spread > 0
		? (2 * s.products) / spread
		: notDeterminable('All readings are the same: concordance has no meaning.');
}

/**
 * 95 % interval of the concordance on Fisher's z scale.
 *
 * One reading a session: Lin's variance (with the correction of 2000). Several: leaving out one cluster at a time, since
 * Lin's variance would take seconds as independent.
 *
 * @param whole moments of all pairs
 * @param clusters moments of each independent unit
 */
export function concordanceInterval(whole: PairMoments, clusters: readonly PairMoments[], confidence = 0.95): Interval {
	const ccc = concordance(whole);
	if (!isDetermined(ccc)) return ccc;
	if (Math.abs(ccc) >= 1)
		return notDeterminable('Every reading equals the reference: there is no spread to judge an interval by.');
	if (clusters.length < whole.n)
		return jackknifeInterval(whole, clusters, concordance, { forward: Math.atanh, back: Math.tanh }, confidence);
	const r = pearsonR(whole);
	if (!isDetermined(r)) return r;
	if (whole.n < 4 || r === 0)
		return notDeterminable('An interval of the concordance needs at least four pairs that correlate.');
	const shift = whole.meanDifference ** 2 / (Math.sqrt(whole.squaresReference * whole.squaresWearable) / whole.n);
	const rest = 1 - ccc * ccc;
	const variance =
		(((1 - r * r) * ccc ** 2) / (rest * r * r) +
			(2 * ccc ** 3 * (1 - ccc) * shift) / (r * rest ** 2) -
			(ccc ** 4 * shift ** 2) / (2 * r * r * rest ** 2)) /
		(whole.n - 2);
	if (!(variance > 0)) return notDeterminable('The variance of the concordance is not determinable from these pairs.');
	const reach = normalQuantile(1 - (1 - confidence) / 2) * Math.sqrt(variance);
	return [Math.tanh(Math.atanh(ccc) - reach), Math.tanh(Math.atanh(ccc) + reach)];
}

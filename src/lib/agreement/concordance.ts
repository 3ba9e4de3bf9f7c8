/** Closeness to the line of identity: Lin's concordance correlation coefficient and its interval. */
import { isDetermined, notDeterminable, type Figure, type Interval } from './determinable';
import { normalQuantile } from './distributions';
import { meanSquare } from './errors';
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
 * 95 % interval of the concordance.
 *
 * One reading a session: Lin's variance (with the correction of 2000). Several, where Lin's variance would take seconds
 * as independent: concordance is 2 cov / (2 cov + mean square of d), so the interval of the mean square and that of
 * the covariance (by leaving out one cluster at a time), both on the log scale, are joined by the method of variance
 * estimates recovery.
 *
 * @param whole moments of all pairs
 * @param clusters moments of each independent unit
 * @param meanSquareCi interval of the mean squared difference over the same clusters
 */
export function concordanceInterval(
	whole: PairMoments,
	clusters: readonly PairMoments[],
	meanSquareCi: Interval,
	confidence = 0.95
): Interval {
	const ccc = concordance(whole);
	if (!isDetermined(ccc)) return ccc;
	if (Math.abs(ccc) >= 1)
		return notDeterminable('Every reading equals the reference: there is no spread to judge an interval by.');
	if (clusters.length < whole.n) return fromParts(whole, clusters, meanSquareCi, confidence);
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

function fromParts(
	whole: PairMoments,
	clusters: readonly PairMoments[],
	meanSquareCi: Interval,
	confidence: number
): Interval {
	if (!isDetermined(meanSquareCi)) return meanSquareCi;
	const log = { forward: Math.log, back: Math.exp };
	const covariance = (s: PairMoments): Figure =>
		s.products > 0 ? s.products / s.n : notDeterminable('Reference and wearable do not rise and fall together.');
	const covarianceCi = jackknifeInterval(whole, clusters, covariance, log, confidence);
	const square = meanSquare(whole);
	if (!isDetermined(covarianceCi) || !isDetermined(square) || !(square > 0))
		return jackknifeInterval(whole, clusters, concordance, { forward: Math.atanh, back: Math.tanh }, confidence);
	// θ = ln(mean square) − ln(2 cov); concordance = 1 / (1 + e^θ) falls as θ rises.
	const [squareLow, squareHigh, covLow, covHigh] = [...meanSquareCi, ...covarianceCi].map(Math.log);
	const middleSquare = Math.log(square);
	const middleCov = Math.log(whole.products / whole.n);
	const theta = middleSquare - middleCov - Math.LN2;
	const low = theta - Math.hypot(middleSquare - squareLow, covHigh - middleCov);
	const high = theta + Math.hypot(squareHigh - middleSquare, middleCov - covLow);
	return [1 / (1 + Math.exp(high)), 1 / (1 + Math.exp(low))];
}

/** Intervals of the mean squared difference, which RMSE and concordance rest on, and of the mean absolute difference. */
import { clusterMean, meanInterval, positiveInterval, type MeanEstimate } from './cluster-mean';
import { isDetermined, notDeterminable, type Interval, type NotDeterminable } from './determinable';
import { meanSquare } from './errors';
import { jackknifeInterval } from './jackknife';
import type { VarianceParts } from './limits';
import { totalVarianceInterval } from './limits-intervals';
import { mergeMoments, type PairMoments } from './sums';

/** What both intervals are made from. */
export interface ErrorEvidence {
	/** Moments by session, and the variance parts of these sessions. */
	sessions: readonly PairMoments[];
	parts: VarianceParts;
	/** Moments of each independent unit, and the bias over them. */
	clusters: readonly PairMoments[];
	bias: MeanEstimate | NotDeterminable;
}

/**
 * Interval of the mean of d², bpm²: the wider of two views.
 *
 * From the bias and the variance parts: right for few sessions whose differences are about normal, where the squares
 * of a handful of session means are too skewed for any direct interval. From leaving out one cluster at a time, on the
 * log scale: right when some sessions hold long faults and nothing is normal. Coverage of both kinds is simulated in
 * the tests.
 */
export function meanSquareInterval(evidence: ErrorEvidence, confidence = 0.95): Interval {
	const whole = mergeMoments(evidence.sessions);
	const direct = jackknifeInterval(
		whole,
		evidence.clusters,
		meanSquare,
		{ forward: Math.log, back: Math.exp },
		confidence
	);
	if (!isDetermined(direct)) return direct;
	return wider(direct, fromVarianceParts(evidence, confidence));
}

/**
 * Interval of the mean of |d|, bpm: the wider of the interval over clusters on the log scale and the one that the
 * variance parts give, the ratio of mean to root mean square error taken as it is.
 */
export function meanAbsoluteInterval(evidence: ErrorEvidence, confidence = 0.95): Interval {
	const whole = mergeMoments(evidence.sessions);
	const direct = positiveInterval(
		clusterMean(evidence.clusters.map((m) => ({ mean: m.absolute / m.n, n: m.n }))),
		confidence
	);
	const square = meanSquare(whole);
	const parts = fromVarianceParts(evidence, confidence);
	if (!isDetermined(direct) || !isDetermined(parts) || !isDetermined(square)) return direct;
	const mean = whole.absolute / whole.n;
	return wider(direct, [mean * Math.sqrt(parts[0] / square), mean * Math.sqrt(parts[1] / square)]);
}

function wider(direct: [number, number], other: Interval): Interval {
	return isDetermined(other) && other[1] - other[0] > direct[1] - direct[0] ? other : direct;
}

function fromVarianceParts({ sessions, parts, bias }: ErrorEvidence, confidence: number): Interval {
	const spread = totalVarianceInterval(sessions, parts, confidence);
	const centre = meanInterval(bias, confidence);
	if ('notDeterminable' in bias || !isDetermined(spread) || !isDetermined(centre) || !isDetermined(parts.total))
		return notDeterminable('The variance parts are not determinable.');
	// The square of an estimated mean is too large by the estimate's variance.
	const square = Math.max(0, bias.mean ** 2 - bias.standardError ** 2);
	const squareLow = centre[0] <= 0 && centre[1] >= 0 ? 0 : Math.min(centre[0] ** 2, centre[1] ** 2);
	const squareHigh = Math.max(centre[0] ** 2, centre[1] ** 2);
	const middle = square + parts.total;
	return [
		Math.max(0, middle - Math.hypot(Math.max(0, square - squareLow), parts.total - spread[0])),
		middle + Math.hypot(squareHigh - square, spread[1] - parts.total)
	];
}

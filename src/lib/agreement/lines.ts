/** Straight lines through pairs: ordinary least squares, Deming, and whether the difference grows with the level. */
import { notDeterminable, type Figure, type NotDeterminable } from './determinable';
import type { PairMoments } from './sums';

export interface Line {
	slope: number;
	intercept: number;
}

/**
 * Least-squares line of the wearable on the reference. Flat where both measure with error; use `deming` for comparing
 * methods.
 */
export function leastSquares(s: PairMoments): (Line & { residualSd: Figure; rSquared: Figure }) | NotDeterminable {
	if (s.n < 2 || !(s.squaresReference > 0))
		return notDeterminable('A line needs at least two different reference values.');
	const slope = s.products / s.squaresReference;
	const explained = slope * s.products;
	const residual = Math.max(0, s.squaresWearable - explained);
	return {
		slope,
		intercept: s.meanWearable - slope * s.meanReference,
		residualSd:
			s.n > 2 ? Math.sqrt(residual / (s.n - 2)) : notDeterminable('A residual SD needs at least three pairs.'),
		rSquared: s.squaresWearable > 0 ? explained / s.squaresWearable : notDeterminable('The wearable does not vary.')
	};
}

/**
 * Deming regression of the wearable on the reference: both measure with error.
 * @param errorRatio variance of the wearable's error over that of the reference's; 1 = orthogonal
 * @see Deming WE (1943) Statistical Adjustment of Data; Linnet K (1993) Clin Chem 39:424-432
 */
export function deming(s: PairMoments, errorRatio = 1): Line | NotDeterminable {
	if (s.n < 2 || !(s.squaresReference > 0))
		return notDeterminable('A line needs at least two different reference values.');
	if (s.products === 0)
		return notDeterminable('Reference and wearable do not move together: the line has no direction.');
	const excess = s.squaresWearable - errorRatio * s.squaresReference;
	const root = Math.hypot(excess, 2 * Math.sqrt(errorRatio) * s.products);
	// Of the two equal forms, the one that adds rather than cancels.
	const slope = excess >= 0 ? (excess + root) / (2 * s.products) : (2 * errorRatio * s.products) / (root - excess);
	return { slope, intercept: s.meanWearable - slope * s.meanReference };
}

/**
 * Proportional bias: slope of the difference on the mean of both, bpm per bpm. 0 = the bias is the same at every
 * level; on the mean, not on the reference, so that error in the reference alone gives no slope.
 * @see Bland JM, Altman DG (1995) Lancet 346:1085-1087
 */
export function proportionalBias(s: PairMoments): Figure {
	const squaresOfMean = (s.squaresReference + s.squaresWearable + 2 * s.products) / 4;
	if (s.n < 2 || !(squaresOfMean > 0)) return notDeterminable('Heart rate does not vary: a slope has no meaning.');
	return (s.squaresWearable - s.squaresReference) / 2 / squaresOfMean;
}

/**
 * Theil-Sen line of y on x: median of all slopes, intercept from the medians. Quadratic in n; for small sets.
 * @param x, y same length
 */
export function theilSen(x: readonly number[], y: readonly number[]): Line | NotDeterminable {
	const slopes: number[] = [];
	for (let i = 0; i < x.length; i++)
		for (let j = i + 1; j < x.length; j++) if (x[i] !== x[j]) slopes.push((y[j] - y[i]) / (x[j] - x[i]));
	if (!slopes.length) return notDeterminable('A line needs at least two different reference values.');
	const median = (values: readonly number[]) => {
		const sorted = [...values].sort((a, b) => a - b);
		return (sorted[(sorted.length - 1) >> 1] + sorted[sorted.length >> 1]) / 2;
	};
	const slope = median(slopes);
	return { slope, intercept: median(y) - slope * median(x) };
}

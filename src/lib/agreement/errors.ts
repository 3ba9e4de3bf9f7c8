/** How far off, on average: MAE, MAPE, RMSE. */
import { notDeterminable, type Figure } from './determinable';
import type { PairMoments } from './sums';

const NO_PAIRS = 'There are no pairs.';

/** Mean difference wearable − reference, bpm. Hides errors that cancel. */
export function bias(s: PairMoments): Figure {
	return s.n > 0 ? s.meanDifference : notDeterminable(NO_PAIRS);
}

/** Mean absolute difference, bpm. */
export function meanAbsoluteError(s: PairMoments): Figure {
	return s.n > 0 ? s.absolute / s.n : notDeterminable(NO_PAIRS);
}

/** Mean absolute difference as a share of the reference, %. Punishes low heart rates. */
export function meanAbsolutePercentageError(s: PairMoments): Figure {
	if (s.n === 0) return notDeterminable(NO_PAIRS);
	if (s.zeroReference > 0)
		return notDeterminable(`${s.zeroReference} of the reference values are 0: a percentage of them has no meaning.`);
	return (100 * s.relative) / s.n;
}

/** Mean squared difference, bpm². */
export function meanSquare(s: PairMoments): Figure {
	return s.n > 0 ? s.squaresDifference / s.n + s.meanDifference ** 2 : notDeterminable(NO_PAIRS);
}

/** Root of the mean squared difference, bpm: large errors weigh more. */
export function rootMeanSquareError(s: PairMoments): Figure {
	return s.n > 0 ? Math.sqrt(s.squaresDifference / s.n + s.meanDifference ** 2) : notDeterminable(NO_PAIRS);
}

/** A count of pairs as a share, 0 to 1. Depends on coverage: a device that falls silent when unsure looks good. */
export function shareOf(count: number, n: number): Figure {
	return n > 0 ? count / n : notDeterminable(NO_PAIRS);
}

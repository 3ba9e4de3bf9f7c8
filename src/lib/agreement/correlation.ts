/** Do they move together: Pearson's r, over all pairs and within sessions. Not agreement: blind to any bias. */
import { notDeterminable, type Figure } from './determinable';
import type { PairMoments } from './sums';

function fromSquares(xx: number, yy: number, xy: number): Figure {
	if (!(xx > 0)) return notDeterminable('The reference does not vary: a correlation has no meaning.');
	if (!(yy > 0)) return notDeterminable('The wearable does not vary: a correlation has no meaning.');
	return Math.max(-1, Math.min(1, xy / Math.sqrt(xx) / Math.sqrt(yy)));
}

/** Pearson's r over all pairs. High with a wide range of heart rates, whatever the bias. */
export function pearsonR(s: PairMoments): Figure {
	return s.n < 2
		? notDeterminable('A correlation needs at least two pairs.')
		: fromSquares(s.squaresReference, s.squaresWearable, s.products);
}

/**
 * Correlation within sessions: of the readings about their own session's means.
 * @see Bland JM, Altman DG (1995) BMJ 310:446
 */
export function repeatedMeasuresR(sessions: readonly PairMoments[]): Figure {
	let n = 0;
	let xx = 0;
	let yy = 0;
	let xy = 0;
	for (const s of sessions) {
		n += s.n;
		xx += s.squaresReference;
		yy += s.squaresWearable;
		xy += s.products;
	}
	return n - sessions.length < 2
		? notDeterminable('A correlation within sessions needs several readings a session.')
		: fromSquares(xx, yy, xy);
}

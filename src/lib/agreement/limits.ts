/** Bias, its spread, and limits of agreement: naive, and allowing for several readings a session. */
import { notDeterminable, type Figure, type Interval } from './determinable';
import { mergeMoments, type PairMoments } from './sums';

/** Multiple of the SD between whose bounds 95 % of normal differences lie, as printed by Bland and Altman. */
export const LIMIT_FACTOR = 1.96;

export interface VarianceParts {
	/** Variance of a session's mean difference about the bias, bpm². 0 where the estimate was negative. */
	between: Figure;
	/** Variance of a difference about its session's mean, bpm². */
	within: Figure;
	/** Variance of one difference: both parts together. */
	total: Figure;
	/** The between-part came out negative and was set to 0. */
	betweenSetToZero: boolean;
	/** Number of readings a session that unequal numbers amount to. */
	n0: Figure;
	meanSquareBetween: Figure;
	meanSquareWithin: Figure;
	dfBetween: number;
	dfWithin: number;
}

/**
 * Variance parts of differences that come several to a session, the true value varying: one-way analysis of variance.
 *
 * between = (MSB − MSW) / n0 with n0 = (N² − Σ nᵢ²) / ((k − 1) N). Where every session has one reading the parts cannot
 * be told apart and the total is the plain variance.
 *
 * @param sessions moments of each session with at least one pair
 * @see Bland JM, Altman DG (1999) Stat Methods Med Res 8:135-160, section 5.3; (2007) J Biopharm Stat 17:571-582
 */
export function varianceParts(sessions: readonly PairMoments[]): VarianceParts {
	const whole = mergeMoments(sessions);
	const k = sessions.length;
	const n = whole.n;
	const dfBetween = Math.max(0, k - 1);
	const dfWithin = n - k;
	let within = 0;
	let between = 0;
	let squaredSizes = 0;
	for (const s of sessions) {
		within += s.squaresDifference;
		between += s.n * (s.meanDifference - whole.meanDifference) ** 2;
		squaredSizes += s.n * s.n;
	}
	const none = (reason: string): VarianceParts => ({
		between: notDeterminable(reason),
		within: dfWithin > 0 ? within / dfWithin : notDeterminable(reason),
		total: notDeterminable(reason),
		betweenSetToZero: false,
		n0: notDeterminable(reason),
		meanSquareBetween: dfBetween > 0 ? between / dfBetween : notDeterminable(reason),
		meanSquareWithin: dfWithin > 0 ? within / dfWithin : notDeterminable(reason),
		dfBetween,
		dfWithin
	});
	if (n === 0) return none('There are no pairs.');
	if (k < 2)
		return none('There is one session only: how much sessions differ cannot be told. Record at least two sessions.');
	const meanSquareBetween = between / dfBetween;
	if (dfWithin === 0) {
		return {
			...none('Every session has one reading: the parts between and within sessions cannot be told apart.'),
			total: meanSquareBetween,
			n0: 1
		};
	}
	const meanSquareWithin = within / dfWithin;
	const n0 = (n * n - squaredSizes) / (dfBetween * n);
	const part = (meanSquareBetween - meanSquareWithin) / n0;
	const clipped = Math.max(0, part);
	return {
		between: clipped,
		within: meanSquareWithin,
		total: clipped + meanSquareWithin,
		betweenSetToZero: part < 0,
		n0,
		meanSquareBetween,
		meanSquareWithin,
		dfBetween,
		dfWithin
	};
}

/** SD of all differences as if they were independent (n − 1). Beside the honest one only to show what it hides. */
export function naiveSd(whole: PairMoments): Figure {
	if (whole.n < 2) return notDeterminable('An SD needs at least two pairs.');
	return Math.sqrt(whole.squaresDifference / (whole.n - 1));
}

/** Bias ± 1.96 SD. The bias is the mean over all pairs. */
export function limitsOfAgreement(bias: number, sd: Figure): Interval {
	return typeof sd === 'number' ? [bias - LIMIT_FACTOR * sd, bias + LIMIT_FACTOR * sd] : sd;
}

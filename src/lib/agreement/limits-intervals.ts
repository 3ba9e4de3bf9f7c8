/** Intervals of the limits of agreement: limits are estimates too. */
import type { MeanEstimate } from './cluster-mean';
import { isDetermined, notDeterminable, type Interval, type NotDeterminable } from './determinable';
import { chiSquaredQuantile, noncentralStudentQuantile, normalQuantile, studentQuantile } from './distributions';
import { LIMIT_FACTOR, type VarianceParts } from './limits';
import type { PairMoments } from './sums';

export interface LimitIntervals {
	lower: Interval;
	upper: Interval;
	/** `exact`: one reading a session, normal differences. `mover`: several readings a session. */
	method: 'exact' | 'mover' | null;
}

/** Factors depend on n alone and take a few milliseconds: once is enough. */
const knownFactors = new Map<string, [number, number]>();

/**
 * Factors f of the exact interval of the upper limit: mean + f · SD, from the non-central t; the lower limit mirrors it.
 * @param n independent differences, at least 2
 * @see Carkeet A (2015) Optom Vis Sci 92:e71-80
 */
export function exactLimitFactors(n: number, confidence = 0.95): [number, number] {
	const key = `${n} ${confidence}`;
	const known = knownFactors.get(key);
	if (known) return known;
	const shift = normalQuantile(0.975) * Math.sqrt(n);
	const tail = (1 - confidence) / 2;
	const factors: [number, number] = [
		noncentralStudentQuantile(tail, n - 1, shift) / Math.sqrt(n),
		noncentralStudentQuantile(1 - tail, n - 1, shift) / Math.sqrt(n)
	];
	knownFactors.set(key, factors);
	return factors;
}

/**
 * Factors of the MOVER interval of the upper limit for n independent differences; as published, the mean's part uses
 * the normal quantile.
 * @see Zou GY (2013) Stat Methods Med Res 22:630-642
 */
export function moverLimitFactors(n: number, confidence = 0.95): [number, number] {
	const tail = (1 - confidence) / 2;
	const z = normalQuantile(0.975);
	const reach = normalQuantile(1 - tail) / Math.sqrt(n);
	const low = Math.sqrt((n - 1) / chiSquaredQuantile(1 - tail, n - 1));
	const high = Math.sqrt((n - 1) / chiSquaredQuantile(tail, n - 1));
	return [z - Math.hypot(reach, z * (1 - low)), z + Math.hypot(reach, z * (high - 1))];
}

/**
 * Degrees of freedom that the within-session sum of squares is worth. Seconds that follow each other, and sessions of
 * unequal quality, carry less than N − k; the spread of the sessions' own sums of squares shows how much less.
 */
function worthOfWithin(sessions: readonly PairMoments[], meanSquareWithin: number, dfWithin: number): number {
	const k = sessions.length;
	let spread = 0;
	let total = 0;
	for (const s of sessions) {
		spread += (s.squaresDifference - (s.n - 1) * meanSquareWithin) ** 2;
		total += s.squaresDifference;
	}
	const variance = (spread * k) / (k - 1);
	return variance > 0 ? Math.min(dfWithin, Math.max(1, (2 * total * total) / variance)) : dfWithin;
}

/**
 * 95 % intervals of both limits.
 *
 * One reading a session: exact. Several: the interval of the total variance MSB / n0 + (1 − 1 / n0) MSW and that of the
 * bias are joined by the method of variance estimates recovery (Zou 2013), with the within-part's degrees of freedom
 * cut to what the sessions' spread supports.
 *
 * @param bias the bias with its standard error over independent clusters
 * @param parts of the same sessions
 */
export function limitIntervals(
	sessions: readonly PairMoments[],
	bias: MeanEstimate | NotDeterminable,
	parts: VarianceParts,
	confidence = 0.95
): LimitIntervals {
	const none = (reason: NotDeterminable): LimitIntervals => ({ lower: reason, upper: reason, method: null });
	if ('notDeterminable' in bias) return none(bias);
	if (!isDetermined(parts.total)) return none(parts.total);
	const sd = Math.sqrt(parts.total);
	if (sd === 0) return none(notDeterminable('All differences are the same: the limits have no spread to judge.'));
	if (parts.dfWithin === 0) {
		const [low, high] = exactLimitFactors(sessions.length, confidence);
		return {
			lower: [bias.mean - high * sd, bias.mean - low * sd],
			upper: [bias.mean + low * sd, bias.mean + high * sd],
			method: 'exact'
		};
	}
	const tail = (1 - confidence) / 2;
	const spread = totalVarianceInterval(sessions, parts, confidence);
	if (!isDetermined(spread)) return none(spread);
	const [sdLow, sdHigh] = [Math.sqrt(spread[0]), Math.sqrt(spread[1])];
	const reach = studentQuantile(1 - tail, bias.df) * bias.standardError;
	const limit = LIMIT_FACTOR * sd;
	const inward = Math.hypot(reach, LIMIT_FACTOR * (sd - sdLow));
	const outward = Math.hypot(reach, LIMIT_FACTOR * (sdHigh - sd));
	return {
		lower: [bias.mean - limit - outward, bias.mean - limit + inward],
		upper: [bias.mean + limit - inward, bias.mean + limit + outward],
		method: 'mover'
	};
}

/**
 * Interval of the variance of one difference, MSB / n0 + (1 − 1 / n0) MSW, each part's chi-squared interval joined by the
 * method of variance estimates recovery. With one reading a session, the chi-squared interval of the plain variance.
 *
 * @param parts variance parts of these sessions
 * @see Zou GY (2013) Stat Methods Med Res 22:630-642
 */
export function totalVarianceInterval(
	sessions: readonly PairMoments[],
	parts: VarianceParts,
	confidence = 0.95
): Interval {
	if (!isDetermined(parts.total)) return parts.total;
	const tail = (1 - confidence) / 2;
	const chi = (p: number) => chiSquaredQuantile(p, parts.dfBetween);
	if (parts.dfWithin === 0)
		return [(parts.total * parts.dfBetween) / chi(1 - tail), (parts.total * parts.dfBetween) / chi(tail)];
	if (!isDetermined(parts.meanSquareBetween) || !isDetermined(parts.meanSquareWithin) || !isDetermined(parts.n0))
		return notDeterminable('The variance parts are not determinable.');
	const fromBetween = parts.meanSquareBetween / parts.n0;
	const fromWithin = (1 - 1 / parts.n0) * parts.meanSquareWithin;
	const within = worthOfWithin(sessions, parts.meanSquareWithin, parts.dfWithin);
	const side = (p: number) =>
		Math.hypot(fromBetween * (1 - parts.dfBetween / chi(p)), fromWithin * (1 - within / chiSquaredQuantile(p, within)));
	return [Math.max(0, parts.total - side(1 - tail)), parts.total + side(tail)];
}

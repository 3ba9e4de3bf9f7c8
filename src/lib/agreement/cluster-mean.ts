/**
 * Interval of a mean over readings that come many to a session: only whole sessions (or people) are independent.
 */
import { studentQuantile } from './distributions';
import { notDeterminable, type Interval, type NotDeterminable } from './determinable';

/** The mean of one session's (or person's) readings and how many they are. */
export interface ClusterMean {
	mean: number;
	n: number;
}

export interface MeanEstimate {
	mean: number;
	standardError: number;
	/** Satterthwaite's degrees of freedom; clusters − 1 when all are of one size. */
	df: number;
}

export const ONE_CLUSTER =
	'There is one session only. Its seconds are not independent, so there is no interval; record at least two sessions.';

/**
 * The mean over all readings with a standard error that treats clusters, not readings, as independent.
 *
 * Residuals of cluster means, each scaled for its pull on the mean (the CR2 form of Bell RM, McCaffrey DF 2002,
 * Survey Methodology 28:169-181, for a mean), with Satterthwaite degrees of freedom under the working model
 * variance(cluster mean) = between + within / n, and scaled to be unbiased under it. With one reading a cluster it is
 * the ordinary standard error with k − 1 degrees of freedom.
 *
 * @param clusters means and numbers of readings (n > 0) of at least two clusters
 * @param between, within variance parts of one reading, any common unit, not both negative; both 0 = clusters of
 *   equal variance
 */
export function clusterMean(clusters: readonly ClusterMean[], between = 1, within = 0): MeanEstimate | NotDeterminable {
	const k = clusters.length;
	if (k < 2) return notDeterminable(k === 0 ? 'There are no pairs.' : ONE_CLUSTER);
	let total = 0;
	for (const c of clusters) total += c.n;
	const weight = clusters.map((c) => c.n / total);
	let mean = 0;
	for (let i = 0; i < k; i++) mean += weight[i] * clusters[i].mean;
	const flat = !(between + within > 0);
	const variance = clusters.map((c) => (flat ? 1 : between + within / c.n));
	const pull = weight.map((w) => (w * w) / (1 - w));
	let truth = 0;
	for (let i = 0; i < k; i++) truth += weight[i] ** 2 * variance[i];
	let robust = 0;
	let expected = 0;
	for (let i = 0; i < k; i++) {
		robust += pull[i] * (clusters[i].mean - mean) ** 2;
		expected += pull[i] * (variance[i] * (1 - 2 * weight[i]) + truth);
	}
	// Variance of the robust sum is 2·tr(QΣQΣ); Q = Σ pullᵢ uᵢuᵢ', uᵢ = eᵢ − weights. Expanded, so that it stays linear:
	// uᵢ'Σuⱼ = δᵢⱼvᵢ + (T − aᵢ − aⱼ), aᵢ = wᵢvᵢ, T = Σw²v.
	let p = 0;
	let pa = 0;
	let paa = 0;
	let diagonal = 0;
	for (let i = 0; i < k; i++) {
		const a = weight[i] * variance[i];
		p += pull[i];
		pa += pull[i] * a;
		paa += pull[i] * a * a;
		diagonal += pull[i] ** 2 * (variance[i] ** 2 + 2 * variance[i] * (truth - 2 * a));
	}
	const crossed = p * p * truth * truth + 2 * p * paa + 2 * pa * pa - 4 * truth * p * pa;
	return {
		mean,
		standardError: Math.sqrt((robust * truth) / expected),
		df: Math.max(1, expected ** 2 / (diagonal + crossed))
	};
}

/** Two-sided interval mean ± t · standard error. */
export function meanInterval(estimate: MeanEstimate | NotDeterminable, confidence = 0.95): Interval {
	if ('notDeterminable' in estimate) return estimate;
	if (!(estimate.standardError > 0))
		return notDeterminable('The sessions do not differ at all: there is no spread to judge an interval by.');
	const reach = studentQuantile(1 - (1 - confidence) / 2, estimate.df) * estimate.standardError;
	return [estimate.mean - reach, estimate.mean + reach];
}

/**
 * Two-sided interval of a mean that cannot be negative, symmetric on the log scale: few sessions of errors are skewed,
 * and a plain interval would end too low.
 */
export function positiveInterval(estimate: MeanEstimate | NotDeterminable, confidence = 0.95): Interval {
	const plain = meanInterval(estimate, confidence);
	if ('notDeterminable' in estimate || 'notDeterminable' in plain || !(estimate.mean > 0)) return plain;
	const reach = (plain[1] - estimate.mean) / estimate.mean;
	return [estimate.mean * Math.exp(-reach), estimate.mean * Math.exp(reach)];
}

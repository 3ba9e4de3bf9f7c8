/** Is the mean difference surely inside a margin that was set beforehand: two one-sided tests. */
import type { MeanEstimate } from './cluster-mean';
import { studentCdf, studentQuantile } from './distributions';
import { notDeterminable, type NotDeterminable } from './determinable';

export interface Equivalence {
	/** bpm; from the plan, never chosen afterwards. */
	marginBpm: number;
	tLower: number;
	tUpper: number;
	/** One-sided p of "the mean is below −margin" and "above +margin". */
	pLower: number;
	pUpper: number;
	/** Both one-sided tests at 5 % hold exactly when this interval lies inside ± margin. */
	ci90: [number, number];
	equivalent: boolean;
}

/**
 * @param estimate mean difference with its standard error over independent clusters
 * @param marginBpm > 0
 * @see Schuirmann DJ (1987) J Pharmacokinet Biopharm 15:657-680
 */
export function equivalence(
	estimate: MeanEstimate | NotDeterminable,
	marginBpm: number
): Equivalence | NotDeterminable {
	if ('notDeterminable' in estimate) return estimate;
	const { mean, standardError, df } = estimate;
	if (!(standardError > 0))
		return notDeterminable('The sessions do not differ at all: there is no spread to test against.');
	const tLower = (mean + marginBpm) / standardError;
	const tUpper = (mean - marginBpm) / standardError;
	const reach = studentQuantile(0.95, df) * standardError;
	const pLower = studentCdf(-tLower, df);
	const pUpper = studentCdf(tUpper, df);
	return {
		marginBpm,
		tLower,
		tUpper,
		pLower,
		pUpper,
		ci90: [mean - reach, mean + reach],
		equivalent: Math.max(pLower, pUpper) < 0.05
	};
}

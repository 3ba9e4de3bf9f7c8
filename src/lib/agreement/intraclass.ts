/** Share of variance between targets: intraclass correlations, named as in Shrout and Fleiss. */
import { notDeterminable, type Figure, type Interval } from './determinable';
import { fisherQuantile } from './distributions';
import type { PairMoments } from './sums';

export interface Intraclass {
	/** One judge of each target, drawn anew. */
	'1,1': Figure;
	/** Two-way random, single, absolute agreement. */
	'2,1': Figure;
	/** Two-way mixed, single, consistency: blind to a bias. */
	'3,1': Figure;
}

/** Mean squares of targets (rows) measured by the same k judges (columns). */
interface TwoWay {
	n: number;
	k: number;
	betweenTargets: number;
	betweenJudges: number;
	residual: number;
	withinTargets: number;
}

/**
 * ICC(1,1), (2,1) and (3,1) of reference and wearable as two judges, each pair a target.
 * Range-dependent, and pairs within a session are no independent targets: no interval is stated here.
 * @see Shrout PE, Fleiss JL (1979) Psychol Bull 86:420-428
 */
export function intraclassOfPairs(s: PairMoments): Intraclass {
	const { n } = s;
	const residualSquares = s.squaresDifference / 2;
	const judgeSquares = (n * s.meanDifference ** 2) / 2;
	return fromMeanSquares({
		n,
		k: 2,
		betweenTargets: (s.squaresReference + s.squaresWearable + 2 * s.products) / 2 / (n - 1),
		betweenJudges: judgeSquares,
		residual: residualSquares / (n - 1),
		withinTargets: (residualSquares + judgeSquares) / n
	});
}

export interface IntraclassOfTable extends Intraclass {
	ci95: Record<keyof Intraclass, Interval>;
	/** Of the mean of all judges. */
	'1,k': Figure;
	'2,k': Figure;
	'3,k': Figure;
}

/**
 * The six forms for targets measured once by each of k judges, with 95 % intervals of the single forms.
 * @param table one row a target, all rows of the same length k ≥ 2; independent targets
 * @see Shrout PE, Fleiss JL (1979) Psychol Bull 86:420-428
 */
export function intraclassOfTable(table: readonly (readonly number[])[], confidence = 0.95): IntraclassOfTable {
	const n = table.length;
	const k = table[0]?.length ?? 0;
	const mean = (values: readonly number[]) => values.reduce((sum, v) => sum + v, 0) / values.length;
	const rowMeans = table.map(mean);
	const grand = mean(rowMeans);
	const columnMeans = Array.from({ length: k }, (_, j) => mean(table.map((row) => row[j])));
	const squares = (values: readonly number[], centre: number) => values.reduce((sum, v) => sum + (v - centre) ** 2, 0);
	const within = table.reduce((sum, row, i) => sum + squares(row, rowMeans[i]), 0);
	const judges = n * squares(columnMeans, grand);
	const ms: TwoWay = {
		n,
		k,
		betweenTargets: (k * squares(rowMeans, grand)) / (n - 1),
		betweenJudges: judges / (k - 1),
		residual: (within - judges) / ((n - 1) * (k - 1)),
		withinTargets: within / (n * (k - 1))
	};
	const single = fromMeanSquares(ms);
	const { betweenTargets: b, betweenJudges: j, residual: e, withinTargets: w } = ms;
	const ratio = (top: number, bottom: number): Figure => (bottom !== 0 ? top / bottom : single['3,1']);
	return {
		...single,
		'1,k': ratio(b - w, b),
		'2,k': ratio(b - e, b + (j - e) / n),
		'3,k': ratio(b - e, b),
		ci95: tableIntervals(ms, single, confidence)
	};
}

function fromMeanSquares({
	n,
	k,
	betweenTargets: b,
	betweenJudges: j,
	residual: e,
	withinTargets: w
}: TwoWay): Intraclass {
	if (n < 2) {
		const reason = notDeterminable('An intraclass correlation needs at least two pairs.');
		return { '1,1': reason, '2,1': reason, '3,1': reason };
	}
	const flat = notDeterminable('Nothing varies: an intraclass correlation has no meaning.');
	const ratio = (top: number, bottom: number): Figure => (bottom > 0 ? top / bottom : flat);
	return {
		'1,1': ratio(b - w, b + (k - 1) * w),
		'2,1': ratio(b - e, b + (k - 1) * e + (k * (j - e)) / n),
		'3,1': ratio(b - e, b + (k - 1) * e)
	};
}

function tableIntervals(ms: TwoWay, single: Intraclass, confidence: number): Record<keyof Intraclass, Interval> {
	const { n, k, betweenTargets: b, betweenJudges: j, residual: e, withinTargets: w } = ms;
	const p = 1 - (1 - confidence) / 2;
	const fromF = (f: number, df1: number, df2: number): Interval => {
		const low = f / fisherQuantile(p, df1, df2);
		const high = f * fisherQuantile(p, df2, df1);
		return [(low - 1) / (low + k - 1), (high - 1) / (high + k - 1)];
	};
	const icc = single['2,1'];
	const dfE = (n - 1) * (k - 1);
	const none = notDeterminable('An interval needs some disagreement between the judges.');
	if (typeof icc !== 'number' || !(w > 0) || !(e > 0)) return { '1,1': none, '2,1': none, '3,1': none };
	const fj = j / e;
	const a = k * icc * fj;
	const c = n * (1 + (k - 1) * icc) - k * icc;
	const v = (dfE * (a + c) ** 2) / ((n - 1) * a * a + c * c);
	const fLow = fisherQuantile(p, n - 1, v);
	const fHigh = fisherQuantile(p, v, n - 1);
	return {
		'1,1': fromF(b / w, n - 1, n * (k - 1)),
		'2,1': [
			(n * (b - fLow * e)) / (fLow * (k * j + (k * n - k - n) * e) + n * b),
			(n * (fHigh * b - e)) / (k * j + (k * n - k - n) * e + n * fHigh * b)
		],
		'3,1': fromF(b / e, n - 1, dfE)
	};
}

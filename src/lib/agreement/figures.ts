/**
 * All figures of a set of pairs, the same in the page, on the server and on the command line.
 *
 * Sessions are summed once (`sumSession`); everything else is made from those sums, so a study keeps the sums and
 * recomputes one session when one tag changes.
 */
import {
	clusterMean,
	meanInterval,
	positiveInterval,
	ONE_CLUSTER,
	type ClusterMean,
	type MeanEstimate
} from './cluster-mean';
import { concordance, concordanceInterval } from './concordance';
import { pearsonR, repeatedMeasuresR } from './correlation';
import { isDetermined, notDeterminable, type Figure, type Interval, type NotDeterminable } from './determinable';
import { equivalence, type Equivalence } from './equivalence';
import { binnedErrorQuantile, exactErrorQuantiles, type PairColumns } from './error-quantiles';
import { meanAbsoluteInterval, meanSquareInterval } from './error-intervals';
import { bias, meanAbsoluteError, meanAbsolutePercentageError, rootMeanSquareError, shareOf } from './errors';
import { intraclassOfPairs } from './intraclass';
import { jackknifeInterval } from './jackknife';
import { limitsOfAgreement, naiveSd, varianceParts } from './limits';
import { limitIntervals } from './limits-intervals';
import { deming, proportionalBias, type Line } from './lines';
import { DEFAULT_PLAN, type AnalysisPlan } from './plan';
import {
	clusterMoments,
	joinSessions,
	sumSession,
	totalCoverage,
	wholeOf,
	type ClusterLevel,
	type PairGroup,
	type SessionSums
} from './sessions';
import type { PairMoments } from './sums';

/** Figures of one analysis. Differences are wearable − reference, bpm; shares are 0 to 1. */
export interface Figures {
	/** Pairs, sessions with pairs, and people (null where a session does not say who). */
	n: number;
	sessions: number;
	participants: number | null;
	/** Share of the reference's sound time with a wearable value. */
	coverage: Figure;
	/** Mean difference over all pairs. */
	bias: Figure;
	biasCi95: Interval;
	/** As if every pair were independent; to show what that hides. */
	sdNaive: Figure;
	loaNaive: Interval;
	/** Allowing for several readings a session. */
	sd: Figure;
	loa: Interval;
	loaLowerCi95: Interval;
	loaUpperCi95: Interval;
	/** How the limits' intervals were made. */
	loaCiMethod: 'exact' | 'mover' | null;
	varBetween: Figure;
	varWithin: Figure;
	/** The between-part came out negative and counts as 0. */
	betweenSetToZero: boolean;
	mae: Figure;
	maeCi95: Interval;
	/** % of the reference. */
	mape: Figure;
	mapeCi95: Interval;
	rmse: Figure;
	rmseCi95: Interval;
	/** Median and 95th percentile of |d|, bpm. */
	medianAbs: Figure;
	p95Abs: Figure;
	pearsonR: Figure;
	/** Correlation within sessions. */
	repeatedMeasuresR: Figure;
	ccc: Figure;
	cccCi95: Interval;
	icc: { '2,1': Figure; '3,1': Figure };
	deming: Line | NotDeterminable;
	/** Slope of the difference on the mean of both, bpm per bpm. */
	proportionalBias: Figure;
	proportionalBiasCi95: Interval;
	within5bpm: Figure;
	within5bpmCi95: Interval;
	within5pct: Figure;
	within10pct: Figure;
	within10pctCi95: Interval;
	/** Within the greater of 10 % and 5 bpm. */
	withinEc13: Figure;
	withinEc13Ci95: Interval;
	/** Wearable within 10 % of half, and of twice, the reference. */
	halfRateShare: Figure;
	doubleRateShare: Figure;
	equivalence: Equivalence | NotDeterminable;
	/** Variance of the mean beside that of independent pairs; and the number of independent pairs that would tell as much. */
	designEffect: Figure;
	effectiveN: Figure;
}

export interface FigureOptions {
	/** What counts as independent. Default: sessions. */
	cluster?: ClusterLevel;
	plan?: Pick<AnalysisPlan, 'equivalenceMarginBpm'>;
}

/**
 * Figures of several sessions' pairs.
 *
 * @param groups pairs by session; parts of one session are put together
 * @throws InvalidInput when columns differ in length or a value is not finite
 */
export function agreementFigures(groups: readonly PairGroup[], options: FigureOptions = {}): Figures {
	return figuresOfSessions(groups.map(sumSession), { ...options, pairs: groups });
}

/**
 * Figures from sums alone.
 *
 * @param parts sums of sessions, or of parts of them
 * @param options.pairs the same pairs as columns, for exact median and 95th percentile; without them these are read
 *   from the counts, to within 0.125 bpm
 */
export function figuresOfSessions(
	parts: readonly SessionSums[],
	options: FigureOptions & { pairs?: readonly PairColumns[] } = {}
): Figures {
	const all = joinSessions(parts);
	const sessions = all.filter((s) => s.sums.n > 0);
	const whole = wholeOf(sessions);
	const bySession = clusterMoments(sessions, 'session');
	const clusters = clusterMoments(sessions, options.cluster ?? 'session');
	const spread = varianceParts(bySession);
	const sd: Figure = isDetermined(spread.total) ? Math.sqrt(spread.total) : spread.total;
	const sdNaive = naiveSd(whole);
	const meanBias = bias(whole);
	const biasEstimate = biasOverClusters(clusters);
	const limits = limitIntervals(bySession, biasEstimate, spread);
	const [medianAbs, p95Abs] = options.pairs
		? exactErrorQuantiles(options.pairs, whole, [0.5, 0.95])
		: [binnedErrorQuantile(whole, 0.5), binnedErrorQuantile(whole, 0.95)];
	const coverage = totalCoverage(all);
	const icc = intraclassOfPairs(whole);
	const effect = designEffect(whole.n, spread.between, spread.within, spread.n0);
	const evidence = { sessions: bySession, parts: spread, clusters, bias: biasEstimate };
	const squareCi = meanSquareInterval(evidence);
	const overClusters = (value: (m: PairMoments) => number) => meanInterval(meanOverClusters(clusters, value));
	const mape = meanAbsolutePercentageError(whole);
	return {
		n: whole.n,
		sessions: sessions.length,
		participants: countParticipants(sessions),
		coverage: coverage ?? notDeterminable('It is not known how long the reference was sound.'),
		bias: meanBias,
		biasCi95: meanInterval(biasEstimate),
		sdNaive,
		loaNaive: isDetermined(meanBias) ? limitsOfAgreement(meanBias, sdNaive) : meanBias,
		sd,
		loa: isDetermined(meanBias) ? limitsOfAgreement(meanBias, sd) : meanBias,
		loaLowerCi95: limits.lower,
		loaUpperCi95: limits.upper,
		loaCiMethod: limits.method,
		varBetween: spread.between,
		varWithin: spread.within,
		betweenSetToZero: spread.betweenSetToZero,
		mae: meanAbsoluteError(whole),
		maeCi95: meanAbsoluteInterval(evidence),
		mape,
		mapeCi95: isDetermined(mape) ? positiveInterval(meanOverClusters(clusters, (m) => (100 * m.relative) / m.n)) : mape,
		rmse: rootMeanSquareError(whole),
		rmseCi95: isDetermined(squareCi) ? [Math.sqrt(squareCi[0]), Math.sqrt(squareCi[1])] : squareCi,
		medianAbs,
		p95Abs,
		pearsonR: pearsonR(whole),
		repeatedMeasuresR: repeatedMeasuresR(bySession),
		ccc: concordance(whole),
		cccCi95: concordanceInterval(whole, clusters, squareCi),
		icc: { '2,1': icc['2,1'], '3,1': icc['3,1'] },
		deming: deming(whole),
		proportionalBias: proportionalBias(whole),
		proportionalBiasCi95: jackknifeInterval(whole, clusters, proportionalBias),
		within5bpm: shareOf(whole.within5Bpm, whole.n),
		within5bpmCi95: shareInterval(overClusters((m) => m.within5Bpm / m.n)),
		within5pct: shareOf(whole.within5Pct, whole.n),
		within10pct: shareOf(whole.within10Pct, whole.n),
		within10pctCi95: shareInterval(overClusters((m) => m.within10Pct / m.n)),
		withinEc13: shareOf(whole.withinEc13, whole.n),
		withinEc13Ci95: shareInterval(overClusters((m) => m.withinEc13 / m.n)),
		halfRateShare: shareOf(whole.halfRate, whole.n),
		doubleRateShare: shareOf(whole.doubleRate, whole.n),
		equivalence: equivalence(biasEstimate, (options.plan ?? DEFAULT_PLAN).equivalenceMarginBpm),
		designEffect: effect.designEffect,
		effectiveN: effect.effectiveN
	};
}

/** Mean difference over independent units, with the variance parts of these units as the working model. */
export function biasOverClusters(clusters: readonly PairMoments[]): MeanEstimate | NotDeterminable {
	const parts = varianceParts(clusters);
	const means = clusters.map((m): ClusterMean => ({ mean: m.meanDifference, n: m.n }));
	return isDetermined(parts.between) && isDetermined(parts.within)
		? clusterMean(means, parts.between, parts.within)
		: clusterMean(means);
}

/** Mean of any per-pair quantity over independent units of about equal variance. */
export function meanOverClusters(
	clusters: readonly PairMoments[],
	value: (m: PairMoments) => number
): MeanEstimate | NotDeterminable {
	return clusterMean(clusters.map((m) => ({ mean: value(m), n: m.n })));
}

/** A share's interval, kept within 0 and 1. */
function shareInterval(interval: Interval): Interval {
	return isDetermined(interval) ? [Math.max(0, interval[0]), Math.min(1, interval[1])] : interval;
}

/**
 * Kish's design effect 1 + (m − 1) ICC of the differences, m the readings a session amounts to, and effective n.
 * @see Kish L (1965) Survey Sampling
 */
function designEffect(
	n: number,
	between: Figure,
	within: Figure,
	n0: Figure
): { designEffect: Figure; effectiveN: Figure } {
	if (!isDetermined(n0) || !isDetermined(between) || !isDetermined(within)) {
		if (n0 === 1) return { designEffect: 1, effectiveN: n };
		const reason = isDetermined(n0) ? notDeterminable(ONE_CLUSTER) : n0;
		return { designEffect: reason, effectiveN: reason };
	}
	const total = between + within;
	if (!(total > 0)) {
		const reason = notDeterminable('All differences are the same.');
		return { designEffect: reason, effectiveN: reason };
	}
	const effect = 1 + ((n0 - 1) * between) / total;
	return { designEffect: effect, effectiveN: n / effect };
}

function countParticipants(sessions: readonly SessionSums[]): number | null {
	const people = new Set<string>();
	for (const s of sessions) {
		if (s.participant === null) return null;
		people.add(s.participant);
	}
	return people.size;
}

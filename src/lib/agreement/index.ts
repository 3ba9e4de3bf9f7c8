/** The agreement engine: pairs to figures. One measure a file; this is the list of them. */
export { bootstrapFigures, intervalOf, type BootstrapInterval, type Resampled } from './bootstrap';
export { clusterMean, meanInterval, type MeanEstimate } from './cluster-mean';
export { adjustComparisons, comparePaired, compareUnpaired, type Comparison } from './compare';
export { concordance, concordanceInterval } from './concordance';
export { pearsonR, repeatedMeasuresR } from './correlation';
export {
	isDetermined,
	notDeterminable,
	reasonOrNull,
	valueOrNull,
	type Figure,
	type Interval,
	type NotDeterminable
} from './determinable';
export { equivalence, type Equivalence } from './equivalence';
export { exactErrorQuantiles } from './error-quantiles';
export { bias, meanAbsoluteError, meanAbsolutePercentageError, rootMeanSquareError, shareOf } from './errors';
export { agreementFigures, figuresOfSessions, type FigureOptions, type Figures } from './figures';
export { holm } from './holm';
export { sessionInfluence, sessionsNeeded, type Influence } from './influence';
export { intraclassOfPairs, intraclassOfTable } from './intraclass';
export { InvalidInput } from './invalid';
export { cohenKappa, labelTable, type Kappa } from './kappa';
export { limitsOfAgreement, naiveSd, varianceParts } from './limits';
export { exactLimitFactors, limitIntervals, moverLimitFactors } from './limits-intervals';
export { deming, leastSquares, proportionalBias, theilSen } from './lines';
export {
	coverageOf,
	kindsInMask,
	pairsOf,
	pairTraces,
	type PairCounts,
	type PairingInput,
	type PairTable
} from './pairing';
export { DEFAULT_PLAN, GRIDS_S, treatmentOf, validatePlan, type AnalysisPlan } from './plan';
export { cumulativeErrorShare, errorsByZone, hexDensity, type Density } from './plot-columns';
export { joinSessions, sumSession, type ClusterLevel, type PairGroup, type SessionSums } from './sessions';
export { mergeSums, sumPairs, type PairSums } from './sums';
export { DEFAULT_TAG_KINDS, sideBlamed } from './tag-kinds';
export { VERDICTS, verdictOf, type Verdict } from './verdict';

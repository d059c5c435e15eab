export { coverageFactor } from '$lib/quantities';
export {
	autocorrelation,
	compensatedSum,
	fiveNumbers,
	mean,
	meanInterval,
	median,
	pooledStandardDeviation,
	quantile,
	standardDeviation,
	standardError,
	type FiveNumbers,
	type Interval
} from './summaries';
export { empiricalDistribution, histogram, roundEdges, type Bin } from './distributions';
export { binsWanted, type HistogramRule } from './histogram-rules';
export { deviationsOfTyped, type Deviations } from './decimals';
export {
	compareScatter,
	meanAgainst,
	meansOfOwnScatter,
	meansOfSameScatter,
	pairedMeans,
	type MeanTest,
	type ScatterTest
} from './mean-tests';
export { analyseVariance, type Anova } from './anova';
export { dixon, grubbs, grubbsCritical, type DixonRisk, type OutlierTest } from './outliers';
export {
	combineQuantities,
	randomEffectsMean,
	weightedMean,
	type BetweenMethod,
	type RandomEffectsMean,
	type WeightedMean
} from './combined-means';
export { normality, type Normality } from './normality';
export {
	durbinWatson,
	fewestToTell,
	residualNormality,
	type ResidualTest,
	type ResidualVerdict
} from './residual-tests';
export {
	chiSquaredAbove,
	chiSquaredExceededBy,
	fAbove,
	fExceededBy,
	normalBelow,
	normalQuantile,
	studentOutside
} from './probability';

export { coverageFactor } from '$lib/quantities';
export {
	compensatedSum,
	fiveNumbers,
	mean,
	quantile,
	standardDeviation,
	standardError,
	type FiveNumbers
} from './summaries';
export { empiricalDistribution, histogram, roundEdges, type Bin } from './distributions';

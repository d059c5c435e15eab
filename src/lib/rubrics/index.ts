export type * from './types';
export {
	criterionMaximum,
	maximum,
	total,
	scoreOfLevel,
	pointsFromWeights,
	type WeightedRubric
} from './score';
export { latePenalty, finalMark } from './late';

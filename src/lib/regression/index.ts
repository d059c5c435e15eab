export { fitLine, lineAt, type FitPolicy, type FitWeights, type LineFit, type LineOptions } from './line';
export { inversePrediction } from './inverse';
export { FitProblem, type FitProblemCode } from './problems';

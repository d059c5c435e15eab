export * as elementary from './elementary';
export { exp as exponential, ln as naturalLogarithm, pow } from './elementary';
export {
	dimensionless,
	isDimensionless,
	nameDimension,
	nameDimensionWithArticle,
	sameDimension,
	type Dimension
} from './dimension';
export { QuantityProblem, type QuantityProblemCode } from './problems';
export {
	coherentUnit,
	compatibleUnits,
	divideUnits,
	intervalUnit,
	multiplyUnits,
	parseUnit,
	unitOne,
	type Unit
} from './units';
export { isUnitSymbol } from './unit-reader';
export { escapeHtml, unitHtml, unitSpeech, unitTex, unitText } from './unit-text';
export {
	addPart,
	correlation,
	covariance,
	differenceIn,
	exactly,
	isDifference,
	isExact,
	plainNumber,
	propagate,
	standardUncertainty,
	toldIn,
	valueIn,
	variance,
	withDeviations,
	type Component,
	type LinearParts,
	type Quantity,
	type Scope,
	type Source
} from './quantity';
export {
	budget,
	combinedUncertainty,
	combineVariances,
	componentVariances,
	type BudgetEntry,
	type Uncertainty
} from './uncertainty';
export {
	absolute,
	add,
	divide,
	multiply,
	negate,
	power,
	squareRoot,
	subtract,
	thermodynamicTemperature
} from './operations';
export { arccosine, arcsine, arctangent, cosine, exp, ln, log10, sine, tangent } from './functions';
export { interpolate, maximum, mean, minimum, standardDeviation, sum, uncertaintyOf } from './lists';
export {
	correlated,
	covarianceFactor,
	covarianceFrom,
	covarianceOfMeans,
	type CovarianceMatrix
} from './correlated';
export { draw, requireDistribution, standardDeviationOf, type Distribution } from './distributions';
export {
	independent,
	jointlyNormal,
	monteCarlo,
	type Interval,
	type MonteCarloOptions,
	type MonteCarloResult,
	type Sampler
} from './monte-carlo';
export { randomSource, Xoshiro128, type RandomSource } from './random';
export { coverageFactor } from './student';
export {
	parseTypedNumber,
	type NumberProblemCode,
	type NumberReading,
	type TypedNumber
} from './parse-number';
export { parseStated, type StatedProblemCode, type StatedQuantity, type StatedReading } from './parse-stated';
export { questionAbout, standardOf, type StatedUncertainty } from './stated-kind';
export {
	formatPlusMinus,
	formatQuantity,
	formatRounded,
	formatTyped,
	numberText,
	withMinus,
	type DisplayForms
} from './format';
export { describeUncertainty, formatStated, type KnownUncertainty } from './format-stated';
export { placeOfFirstDigit, roundToDigits, roundToUncertainty, type RoundedNumber } from './rounding';

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
	isUnitSymbol,
	multiplyUnits,
	parseUnit,
	unitOne,
	type Unit
} from './units';
export { escapeHtml, unitHtml, unitSpeech, unitTex, unitText } from './unit-text';
export {
	addPart,
	budget,
	combinedUncertainty,
	combineVariances,
	componentVariances,
	covariance,
	differenceIn,
	exactly,
	isExact,
	plainNumber,
	propagate,
	standardUncertainty,
	toldIn,
	valueIn,
	variance,
	withDeviations,
	type BudgetEntry,
	type Component,
	type LinearParts,
	type Quantity,
	type Scope,
	type Source,
	type Uncertainty
} from './quantity';
export {
	absolute,
	add,
	divide,
	exp,
	interpolate,
	ln,
	mean,
	multiply,
	negate,
	power,
	squareRoot,
	subtract,
	sum,
	thermodynamicTemperature
} from './operations';
export { coverageFactor } from './student';
export { parseTypedNumber, type NumberReading, type TypedNumber } from './parse-number';
export {
	formatExpanded,
	formatQuantity,
	formatRounded,
	formatTyped,
	numberText,
	placeOfFirstDigit,
	roundToDigits,
	roundToUncertainty,
	withMinus,
	type DisplayForms,
	type RoundedNumber
} from './format';

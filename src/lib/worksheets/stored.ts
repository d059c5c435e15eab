import { columnFunctions } from './functions';
import { orderSteps } from './order';
import type {
	ColumnDefinition,
	ComparisonDefinition,
	Evaluation,
	FigureData,
	FigureDefinition,
	FitDefinition,
	Formula,
	Naming,
	ParameterDefinition,
	Reference,
	ResultDefinition,
	Rubric,
	ShownFit,
	ShownQuantity,
	TableDefinition,
	Worksheet,
	WorksheetStep
} from './types';

// What is stored stays as it was written; earlier forms are filled up when they are read.

type Earlier<T, Later extends keyof T> = Omit<T, Later> & Partial<Pick<T, Later>>;

type StoredColumn = Earlier<ColumnDefinition, 'when' | 'policy' | 'of'>;
type StoredTable = Earlier<Omit<TableDefinition, 'columns'>, 'key' | 'fixed'> & { columns: StoredColumn[] };
type StoredFit = Earlier<FitDefinition, 'per' | 'where' | 'whereText' | 'parameters' | 'terms' | 'curve'> & {
	/** of a line, before there were other models */
	slope?: Naming;
	intercept?: Naming;
};
type StoredComparison = Earlier<Omit<ComparisonDefinition, 'reference'>, 'references'> & {
	reference: Earlier<Reference, 'formula'> | null;
};
type StoredStep =
	Earlier<Extract<WorksheetStep, { kind: 'column' }>, 'local'> | Exclude<WorksheetStep, { kind: 'column' }>;

/** A worksheet as any version has stored it. */
export type StoredWorksheet = Omit<
	Worksheet,
	| 'hazards'
	| 'parameters'
	| 'tables'
	| 'fits'
	| 'results'
	| 'comparisons'
	| 'figures'
	| 'mistakes'
	| 'rubrics'
	| 'order'
> & {
	hazards: Earlier<Worksheet['hazards'], 'whenItGoesWrong'>;
	parameters: Earlier<ParameterDefinition, 'kind' | 'choices'>[];
	tables: StoredTable[];
	fits: StoredFit[];
	results: Earlier<ResultDefinition, 'per' | 'policy'>[];
	comparisons: StoredComparison[];
	figures: Earlier<FigureDefinition, 'table' | 'x' | 'y' | 'by'>[];
	mistakes?: Worksheet['mistakes'];
	rubrics: { prelab?: Rubric | null; notebook?: Rubric | null; report: Rubric };
	order: StoredStep[];
};

/** A stored worksheet in the present form. One that has it already comes out as it went in. */
export function fromStored(stored: StoredWorksheet): Worksheet {
	const worksheet = {
		...stored,
		hazards: { whenItGoesWrong: '', ...stored.hazards },
		parameters: stored.parameters.map((parameter) => ({
			kind: 'number' as const,
			choices: [],
			...parameter
		})),
		tables: stored.tables.map((table) => ({
			key: null,
			fixed: null,
			...table,
			columns: table.columns.map((column) => ({
				when: null,
				policy: null,
				of: null,
				...column,
				formula: column.formula && overColumns(column.formula)
			}))
		})),
		fits: stored.fits.map(fitFromStored),
		results: stored.results.map((result) => ({
			per: null,
			policy: null,
			...result,
			formula: overColumns(result.formula)
		})),
		comparisons: stored.comparisons.map((comparison) => ({
			references: {},
			...comparison,
			reference: comparison.reference && { formula: null, ...comparison.reference }
		})),
		figures: stored.figures.map((figure) => ({ table: null, x: null, y: null, by: null, ...figure })),
		rubrics: { prelab: null, notebook: null, ...stored.rubrics },
		mistakes: stored.mistakes ?? []
	};
	return { ...worksheet, order: orderFromStored(worksheet, stored.order) };
}

function fitFromStored({ slope, intercept, ...fit }: StoredFit): FitDefinition {
	return {
		per: null,
		where: null,
		whereText: null,
		parameters: [slope, intercept].filter((naming) => naming !== undefined),
		terms: [],
		curve: null,
		...fit
	};
}

/** Steps that do not say yet which columns rest on their own row: put in order anew. */
function orderFromStored(
	worksheet: Omit<Worksheet, 'order'>,
	stored: readonly StoredStep[]
): WorksheetStep[] {
	const known = stored.flatMap((step): WorksheetStep[] => {
		if (step.kind !== 'column') return [step];
		return step.local === undefined ? [] : [{ ...step, local: step.local }];
	});
	if (known.length === stored.length) return known;
	const ordered = orderSteps(worksheet);
	if ('cycle' in ordered)
		throw new Error(`The stored worksheet ${worksheet.slug} goes in a circle: ${ordered.cycle.join(', ')}.`);
	return ordered.order;
}

/** Functions of columns were written like all others; the column they take says which table they run over. */
function overColumns(formula: Formula): Formula {
	switch (formula.op) {
		case 'negate':
			return { ...formula, of: overColumns(formula.of) };
		case 'add':
		case 'subtract':
		case 'multiply':
		case 'divide':
		case 'power':
			return { ...formula, left: overColumns(formula.left), right: overColumns(formula.right) };
		case 'call': {
			const inner = formula.arguments.map(overColumns);
			const column = inner.find((argument) => argument.op === 'column');
			return column && inner.length === 1 && Object.hasOwn(columnFunctions, formula.function)
				? { op: 'over', function: formula.function, table: column.table, arguments: inner, where: null }
				: { ...formula, arguments: inner };
		}
		default:
			return formula;
	}
}

type StoredShownFit = Earlier<Omit<ShownFit, 'parameters' | 'covariance'>, 'iterations'> & {
	parameters: ShownQuantity[] | { slope: ShownQuantity; intercept: ShownQuantity };
	/** of a line once the one number between its two parameters */
	covariance: number[][] | number;
};

/** An evaluation as any version has stored it. */
export type StoredEvaluation = Omit<Evaluation, 'fits'> & { fits: Record<string, StoredShownFit> };

/** A stored evaluation in the present form, its numbers and sentences as they were said. */
export function evaluationFromStored(stored: StoredEvaluation): Evaluation {
	return {
		...stored,
		fits: mapped(stored.fits, shownFitFromStored),
		figures: mapped(stored.figures, (figure) => ({
			...figure,
			series: figure.series.map((series) => ({ ...curveOfLine(figure.line), ...series }))
		}))
	};
}

function shownFitFromStored({ parameters, covariance, ...fit }: StoredShownFit): ShownFit {
	const list = Array.isArray(parameters) ? parameters : [parameters.slope, parameters.intercept];
	const square = ({ standardUncertainty: u }: ShownQuantity) => (u ?? 0) * (u ?? 0);
	return {
		iterations: 0,
		...fit,
		parameters: list,
		covariance: Array.isArray(covariance)
			? covariance
			: list.map((a) => list.map((b) => (a === b ? square(a) : covariance)))
	};
}

function curveOfLine(line: FigureData['line']): Pick<FigureData['series'][number], 'curve'> {
	if (!line) return {};
	const { slope, intercept, band } = line;
	return { curve: band.map(({ x, low, high }) => ({ x, y: intercept + slope * x, low, high })) };
}

function mapped<T, U>(record: Record<string, T>, to: (value: T) => U): Record<string, U> {
	return Object.fromEntries(Object.entries(record).map(([name, value]) => [name, to(value)]));
}

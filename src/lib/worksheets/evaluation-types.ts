// What worksheets give to and take from everyone else. All of it is plain JSON, so that an Evaluation
// can be stored in a snapshot and sent over the API.

/** Readings exactly as typed. Cells keep the text: "25.30" is not "25.3". */
export interface Readings {
	/** one text per parameter name, e.g. { p_b: '756.2' }; absent = not read yet */
	parameters: Record<string, string>;
	/** rows in order, per table name */
	tables: Record<string, ReadingRow[]>;
}
export interface ReadingRow {
	id: string;
	/** column name -> text as typed */
	cells: Record<string, string>;
	status: 'used' | 'aborted' | 'excluded';
	/** required when status is not 'used' */
	reason?: string;
}

export interface Problem {
	severity: 'error' | 'warning' | 'note';
	code: string; // kebab-case, stable
	message: string; // plain words: what, where, what to do
	table?: string;
	row?: string; // row id
	column?: string;
	parameter?: string;
	/** when it concerns a named value */
	name?: string;
	/** key of the row that the value belongs to */
	group?: string;
}

/** A value stated in place of a computed one: everything downstream is computed from it. */
export interface CarriedValue {
	/** computed column, fitted parameter or result */
	name: string;
	/** row id (or key of the row) for a value that each row has; absent for a single one */
	row?: string;
	/** as typed, in the unit of the name: '1.394(12)' */
	text: string;
}

/** A value ready to be shown; never rounded except in `display`. */
export interface ShownQuantity {
	name: string; // 'H_vap'; 'gamma.argon' where each row of a table has one
	/** key of the row it belongs to; absent for a single value */
	group?: string;
	label: string; // 'Enthalpy of vaporization'
	symbol: string; // KaTeX source, e.g. '\\Delta_{\\mathrm{vap}}H'
	value: number; // in `unit`
	unit: string; // plain text, e.g. 'kJ/mol'; '1' when dimensionless
	standardUncertainty: number | null; // null: exact or not stated
	degreesOfFreedom: number | null; // null: infinite
	coverageFactor: number | null; // Student t, 95 %
	expanded95: number | null;
	display: DisplayForms;
	budget: BudgetLine[];
	/** one of the results that the experiment is about; absent for all others */
	headline?: true;
}
export interface DisplayForms {
	text: string; // '41.6(6) kJ/mol' with U+2212, U+2009
	tex: string; // KaTeX source, '41.6(6)~\\mathrm{kJ\\,mol^{-1}}'
	html: string; // our own escaped markup with <sup>, class names only
	speech: string; // '41.6 with standard uncertainty 0.6 kilojoules per mole'
}
export interface BudgetLine {
	source: string;
	label: string;
	contribution: number;
	share: number;
	degreesOfFreedom: number | null;
}

export interface ShownColumn {
	name: string;
	label: string;
	symbol: string;
	unit: string;
	unitHtml: string;
	/** absent in what older engines said: a number */
	kind?: 'number' | 'text' | 'choice';
	computed: boolean;
	resolution: string | null;
}
export interface ShownCell {
	text: string;
	value: number | null;
	standardUncertainty: number | null;
	problem: string | null;
}
export interface ShownTable {
	name: string;
	caption: string;
	columns: ShownColumn[];
	rows: ShownRow[];
}
export interface ShownRow {
	id: string;
	number: number;
	status: ReadingRow['status'];
	reason?: string;
	cells: Record<string, ShownCell>;
}
export interface ShownFit {
	name: string; // 'line'; 'line.argon' where each row of a table has one
	group?: string;
	label: string;
	model: 'line' | 'origin' | 'both-axes' | 'polynomial' | 'linear' | 'curve';
	policy: 'scatter' | 'stated';
	points: number;
	degreesOfFreedom: number;
	residualStandardDeviation: number | null;
	chiSquared: number | null;
	/** in the model's order; a line has slope and intercept */
	parameters: ShownQuantity[];
	/** of the parameters, in their units, in their order */
	covariance: number[][];
	/** rounds of an iterated fit; 0 for one solved at once */
	iterations: number;
	/** a sentence that says the policy in force */
	sentence: string;
}
export interface ShownComparison {
	name: string;
	group?: string;
	quantity: string;
	reference: {
		value: number;
		unit: string;
		standardUncertainty: number | null;
		conditions: string;
		source: string;
		display: DisplayForms;
	};
	measured: DisplayForms;
	difference: number;
	standardUncertainty: number;
	expanded95: number;
	normalisedError: number | null;
	verdict: 'compatible' | 'not compatible' | 'too uncertain to tell';
	sentence: string;
}
export interface FigureData {
	name: string;
	caption: string;
	x: { label: string; symbol: string; unit: string };
	y: { label: string; symbol: string; unit: string };
	series: {
		label: string;
		/** as links write the key of the row; absent for a single series */
		key?: string;
		points: {
			row: string;
			x: number;
			y: number;
			ux: number | null;
			uy: number | null;
			residual: number | null;
			used: boolean;
		}[];
		/** the fitted line or curve through this series with its band; absent where nothing is fitted */
		curve?: { x: number; y: number; low: number; high: number }[];
	}[];
	/** of the only series, where it is a straight line; null otherwise */
	line: {
		slope: number;
		intercept: number;
		from: number;
		to: number;
		band: { x: number; low: number; high: number }[];
	} | null;
}
export interface SampleCalculation {
	name: string;
	title: string;
	row: string | null;
	symbolic: string;
	substituted: string;
	result: string;
	partials: { symbol: string; tex: string; value: number; unit: string }[];
	budget: BudgetLine[];
}

export interface Evaluation {
	engine: string; // version, part of every snapshot
	problems: Problem[];
	quantities: Record<string, ShownQuantity>;
	tables: Record<string, ShownTable>;
	fits: Record<string, ShownFit>;
	comparisons: Record<string, ShownComparison>;
	figures: Record<string, FigureData>;
	workings: Record<string, SampleCalculation>;
}

/** What `readTable` found in pasted text or a file: cells as text, in the column's own unit. */
export interface TableReading {
	rows: { cells: Record<string, string> }[];
	problems: Problem[];
	/** what became of each column of the text, in order */
	columns: { header: string; column: string | null; unit: string | null; note: string | null }[];
	/** ',' ';' or tab */
	delimiter: string;
	/** rows in the text, those beyond the limit included */
	rowCount: number;
}

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
}

/** A value ready to be shown; never rounded except in `display`. */
export interface ShownQuantity {
	name: string; // 'H_vap'
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
	rows: {
		id: string;
		number: number;
		status: ReadingRow['status'];
		reason?: string;
		cells: Record<string, ShownCell>;
	}[];
}
export interface ShownFit {
	name: string;
	label: string;
	model: 'line';
	policy: 'scatter' | 'stated';
	points: number;
	degreesOfFreedom: number;
	residualStandardDeviation: number | null;
	chiSquared: number | null;
	parameters: { slope: ShownQuantity; intercept: ShownQuantity };
	covariance: number;
	/** a sentence that says the policy in force */
	sentence: string;
}
export interface ShownComparison {
	name: string;
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
		points: {
			row: string;
			x: number;
			y: number;
			ux: number | null;
			uy: number | null;
			residual: number | null;
			used: boolean;
		}[];
	}[];
	line: {
		slope: number;
		intercept: number;
		from: number;
		to: number;
		band: { x: number; low: number; high: number }[];
	} | null;
}
export interface SampleStep {
	tex: string;
	note: string;
} // 'formula', 'substitution', 'result'
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

/** Text to be read by people in Markdown with KaTeX; never HTML. */
export type Markdown = string;

/** A component of a reading's standard uncertainty. Its size is a standard deviation unless the distribution says it is a half-width. */
export interface UncertaintyComponent {
	/** unique within the column or parameter, e.g. 'thermometer'. The same `shared` name elsewhere is the same source. */
	name: string;
	label: string;
	/** 'normal': `size` is the standard deviation; 'rectangular' and 'triangular': `size` is the half-width */
	distribution: 'normal' | 'rectangular' | 'triangular';
	/**
	 * 'reading': drawn anew in every row. All others are one common deviation of every row (an instrument's offset, say);
	 * 'run', 'session' and 'course' say how far beyond one table it reaches.
	 */
	scope: 'reading' | 'run' | 'instrument' | 'session' | 'course';
	/** for shared scopes: 'offset' adds the same amount to all rows, 'gain' the same fraction of the value */
	acts: 'offset' | 'gain';
	/** in `unit` (for a gain: a fraction, unit '1') */
	size: number;
	unit: string;
	/** null: known as if from infinitely many readings */
	degreesOfFreedom: number | null;
	/** where the figure comes from: certificate, data sheet, common practice */
	source: string;
}

export type ColumnKind = 'number' | 'text' | 'choice';

export interface ColumnDefinition {
	/** name used in formulas and in headers of files */
	name: string;
	label: string;
	/** KaTeX source */
	symbol: string;
	kind: ColumnKind;
	/** plain text, '1' when dimensionless; '' for text and choices */
	unit: string;
	/** digital step of the display in `unit`, as typed ('0.01'), null when not stated */
	resolution: string | null;
	uncertainty: UncertaintyComponent[];
	/** rows without it stay out of the workings (with a problem that says so) */
	required: boolean;
	/** lowest and highest plausible value in `unit`; a reading outside is asked about, never refused */
	plausible: { low: number; high: number } | null;
	/** for kind 'choice' */
	choices: string[];
	/** null for what is read; otherwise computed row by row */
	formula: Formula | null;
	/** the formula as its author wrote it */
	formulaText: string | null;
	help: string;
}

export interface TableDefinition {
	name: string;
	caption: string;
	/** fewest rows in use that the experiment asks for */
	minimumRows: number;
	columns: ColumnDefinition[];
}

/** A single reading that belongs to the whole run, e.g. the barometer. */
export interface ParameterDefinition {
	name: string;
	label: string;
	symbol: string;
	unit: string;
	resolution: string | null;
	uncertainty: UncertaintyComponent[];
	required: boolean;
	plausible: { low: number; high: number } | null;
	help: string;
}

export interface ConstantDefinition {
	name: string;
	label: string;
	symbol: string;
	value: number;
	unit: string;
	/** in `unit`; null when exact */
	standardUncertainty: number | null;
	source: string;
}

/** A formula as a JSON tree: parsed when the experiment is stored, so that browsers need no parser. */
export type Formula =
	| { op: 'number'; value: number; text: string }
	| { op: 'unit'; unit: string }
	/** a parameter, constant, result or a fit's slope or intercept */
	| { op: 'name'; name: string }
	/** in a formula of the same table's rows: that row's cell; inside mean(), sum()...: the whole column */
	| { op: 'column'; table: string; column: string }
	| { op: 'negate'; of: Formula }
	| { op: 'add' | 'subtract' | 'multiply' | 'divide' | 'power'; left: Formula; right: Formula }
	| { op: 'call'; function: string; arguments: Formula[] };

export interface FitDefinition {
	name: string;
	label: string;
	model: 'line';
	table: string;
	/** column names of `table` */
	x: string;
	y: string;
	/** 'stated': weights from the readings' own uncertainty */
	weights: 'equal' | 'stated';
	/** 'scatter': the reading-scope parts are replaced by the residual scatter; 'stated': they are kept and chi-squared is shown */
	policy: 'scatter' | 'stated';
	slope: { name: string; label: string; symbol: string; unit: string };
	intercept: { name: string; label: string; symbol: string; unit: string };
}

export interface ResultDefinition {
	name: string;
	label: string;
	symbol: string;
	unit: string;
	formula: Formula;
	formulaText: string;
	/** one of the values an abstract should give */
	headline: boolean;
	help: string;
}

export interface ComparisonDefinition {
	name: string;
	/** name of a result */
	quantity: string;
	reference: {
		label: string;
		unit: string;
		/** a fixed value, or pairs (value of `at`, reference value) interpolated linearly */
		value: number | null;
		interpolate: { at: string; unit: string; points: { at: number; value: number }[] } | null;
		/** in `unit`; null when the source states none */
		standardUncertainty: number | null;
		conditions: string;
		source: string;
	};
	/** the largest expanded uncertainty, in `unit`, at which a verdict is still worth giving */
	limit: number;
}

export interface FigureDefinition {
	name: string;
	caption: string;
	/** name of a fit: its points, line, band and residuals */
	fit: string;
}

/** What has to be there while the apparatus still is. */
export type RequirementDefinition =
	| {
			kind: 'parameter';
			code: string;
			parameter: string;
			severity: 'error' | 'warning' | 'note';
			message: string;
	  }
	| {
			kind: 'rows';
			code: string;
			table: string;
			minimum: number;
			severity: 'error' | 'warning' | 'note';
			message: string;
	  }
	| {
			kind: 'span';
			code: string;
			table: string;
			column: string;
			minimum: number;
			unit: string;
			severity: 'error' | 'warning' | 'note';
			message: string;
	  };

export interface Hazard {
	what: string;
	/** GHS hazard statements; the text beside each code */
	statements: { code: string; text: string }[];
	cautions: string;
}

export interface OutlineSection {
	key: string;
	title: string;
	owner: 'author' | 'team';
	guide: Markdown;
}

export interface RubricCriterion {
	key: string;
	title: string;
	/** what the criterion asks, one sentence */
	asks: string;
	/** share of the total; weights need not sum to 1 */
	weight: number;
	/** lowest first; `level` counts from 0 */
	levels: { level: number; title: string; text: string }[];
}

export interface Rubric {
	title: string;
	criteria: RubricCriterion[];
}

/** An experiment as data. Serialisable as JSON; what an experiment version stores. */
export interface Worksheet {
	slug: string;
	title: string;
	version: number;
	/** one sentence on what is found and how */
	summary: string;
	guide: Markdown;
	hazards: { notice: string; protection: string; substances: Hazard[] };
	constants: ConstantDefinition[];
	parameters: ParameterDefinition[];
	tables: TableDefinition[];
	fits: FitDefinition[];
	results: ResultDefinition[];
	comparisons: ComparisonDefinition[];
	figures: FigureDefinition[];
	requirements: RequirementDefinition[];
	outline: OutlineSection[];
	rubrics: { report: Rubric };
	/** names in an order in which each stands after everything it needs */
	order: WorksheetStep[];
}

export type WorksheetStep =
	| { kind: 'column'; table: string; column: string }
	| { kind: 'fit'; name: string }
	| { kind: 'result'; name: string };

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

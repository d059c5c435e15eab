// An experiment as data: what its author writes down, checked and compiled. Plain JSON as well.

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

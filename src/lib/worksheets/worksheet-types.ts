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
	/** rows that do not meet it have no value here, and that is no problem */
	when: Formula | null;
	/** of the means in the formula; null where it takes none */
	policy: Policy | null;
	/** for a text or choice: the table whose key this cell names, the parent of this table */
	of: string | null;
	help: string;
}

/** 'scatter': what is drawn anew in each row is replaced by the scatter found; 'stated': it is kept as stated. */
export type Policy = 'scatter' | 'stated';

export interface TableDefinition {
	name: string;
	caption: string;
	/** fewest rows in use that the experiment asks for */
	minimumRows: number;
	/** the column that tells the rows apart, for tables that others name in `of` or that results go by */
	key: string | null;
	/** the rows, where the experiment gives them and nothing is typed: cells by column, as if typed */
	fixed: Record<string, string>[] | null;
	/** typed and computed, among the latter those that fits and results by row leave */
	columns: ColumnDefinition[];
}

/** A single reading that belongs to the whole session, e.g. the barometer, or a choice that holds for all of it. */
export interface ParameterDefinition {
	name: string;
	label: string;
	symbol: string;
	kind: 'number' | 'choice';
	/** '' for a choice */
	unit: string;
	choices: string[];
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
	| { op: 'text'; text: string }
	/** a parameter, constant, result or fitted parameter */
	| { op: 'name'; name: string }
	/** a number column: this row's cell, the parent's, or inside a function of columns each row's in turn */
	| { op: 'column'; table: string; column: string }
	/** a text or choice column, for conditions */
	| { op: 'cell'; table: string; column: string }
	/** a parameter of kind choice, for conditions */
	| { op: 'choice'; name: string }
	/** whether a cell or parameter that need not be read has a value */
	| { op: 'given'; of: Formula }
	| { op: 'negate' | 'not'; of: Formula }
	| { op: 'add' | 'subtract' | 'multiply' | 'divide' | 'power' | 'and' | 'or'; left: Formula; right: Formula }
	| { op: 'compare'; how: Comparing; left: Formula; right: Formula }
	| { op: 'if'; condition: Formula; yes: Formula; no: Formula }
	| { op: 'call'; function: string; arguments: Formula[] }
	/** a function of columns: over the rows of `table` that are related to the row at hand and meet `where` */
	| { op: 'over'; function: string; table: string; arguments: Formula[]; where: Formula | null }
	/** what a fit leaves in the rows it goes by */
	| { op: 'fitted'; fit: string };

export type Comparing = '==' | '!=' | '<' | '<=' | '>' | '>=';

/** A name that a fit or a result gives to a value. */
export interface Naming {
	name: string;
	label: string;
	/** KaTeX source */
	symbol: string;
	/** plain text, '1' when dimensionless */
	unit: string;
}

export interface FitDefinition {
	name: string;
	label: string;
	/** 'both-axes': a line with uncertainty in x and y and their correlation */
	model: 'line' | 'origin' | 'both-axes' | 'polynomial' | 'linear' | 'curve';
	table: string;
	/** the table whose rows each have their own fit; null: one fit */
	per: string | null;
	/** only rows that meet it */
	where: Formula | null;
	whereText: string | null;
	/** column names of `table`; x is null where the terms tell */
	x: string | null;
	y: string;
	/** 'stated': from the points' own uncertainty; otherwise the name of a column of relative weights */
	weights: string;
	policy: Policy;
	/** in the model's own order: slope, intercept; powers from 0; terms; a curve's as declared */
	parameters: Naming[];
	/** of a linear model, one for each parameter */
	terms: Formula[];
	/** of a curve: y as a function of columns and parameters, and where each parameter's search begins */
	curve: { formula: Formula; formulaText: string; starts: Formula[] } | null;
}

export interface ResultDefinition extends Naming {
	/** the table whose rows each have their own value; null: one value */
	per: string | null;
	formula: Formula;
	formulaText: string;
	/** of the means in the formula; null where it takes none */
	policy: Policy | null;
	/** one of the values an abstract should give */
	headline: boolean;
	help: string;
}

export interface Reference {
	label: string;
	unit: string;
	/** a fixed value, pairs (value of `at`, reference value) interpolated linearly, or a formula */
	value: number | null;
	interpolate: { at: string; unit: string; points: { at: number; value: number }[] } | null;
	formula: Formula | null;
	/** in `unit`; null when the source states none */
	standardUncertainty: number | null;
	conditions: string;
	source: string;
}

export interface ComparisonDefinition {
	name: string;
	/** name of a result */
	quantity: string;
	/** for a result with one value; null where `references` has one for each row's key */
	reference: Reference | null;
	references: Record<string, Reference>;
	/** the largest expanded uncertainty, in `unit`, at which a verdict is still worth giving */
	limit: number;
}

/** Either a fit's points, line and residuals, or columns of a table as they are. */
export interface FigureDefinition {
	name: string;
	caption: string;
	fit: string | null;
	table: string | null;
	x: string | null;
	y: string | null;
	/** the table whose rows each have their own series; null: one series */
	by: string | null;
}

export type Severity = 'error' | 'warning' | 'note';

/** What has to be there while the apparatus still is. */
export type RequirementDefinition = { code: string; severity: Severity; message: string } & (
	| { kind: 'parameter'; parameter: string }
	| { kind: 'rows'; table: string; minimum: number }
	| { kind: 'span'; table: string; column: string; minimum: number; unit: string }
	/** for every row in use of `table`, or once where it is null */
	| {
			kind: 'check';
			table: string | null;
			condition: Formula;
			/** what a condition that cannot be worked out yet counts as */
			missing: 'unmet' | 'waits';
	  }
);

/** What somebody's workings look like who makes this mistake. */
export interface MistakeDefinition {
	code: string;
	title: string;
	message: string;
	instead: {
		formulas: Record<string, Formula>;
		constants: Record<string, { value: number; unit: string }>;
		fits: Record<string, Partial<Pick<FitDefinition, 'weights' | 'policy' | 'x' | 'y'>>>;
	};
	/** the worksheet's order with these replacements */
	order: WorksheetStep[];
}

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
	hazards: { notice: string; protection: string; whenItGoesWrong: string; substances: Hazard[] };
	constants: ConstantDefinition[];
	parameters: ParameterDefinition[];
	tables: TableDefinition[];
	fits: FitDefinition[];
	results: ResultDefinition[];
	comparisons: ComparisonDefinition[];
	figures: FigureDefinition[];
	requirements: RequirementDefinition[];
	mistakes: MistakeDefinition[];
	outline: OutlineSection[];
	rubrics: { prelab: Rubric | null; notebook: Rubric | null; report: Rubric };
	/** names in an order in which each stands after everything it needs */
	order: WorksheetStep[];
}

export type WorksheetStep =
	/** `local`: computed from the row's own readings alone, so that a row it fails in is out of use */
	| { kind: 'column'; table: string; column: string; local: boolean }
	| { kind: 'fit'; name: string }
	| { kind: 'result'; name: string };

import { parseUnit, QuantityProblem } from '$lib/quantities';
import {
	FormulaProblem,
	parseCondition,
	parseValue,
	type FormulaScope,
	type ScopeTable
} from './formula-parser';
import { nodesOf } from './formula-tree';
import { columnFunctions } from './functions';
import type { FitSource, WorksheetSource } from './source-schema';
import type {
	ColumnDefinition,
	ComparisonDefinition,
	FitDefinition,
	Formula,
	MistakeDefinition,
	Naming,
	Policy,
	Reference,
	RequirementDefinition,
	ResultDefinition,
	TableDefinition
} from './types';

/** Path of a field in the source, e.g. ['tables', 0, 'columns', 2, 'formula']. */
export type FieldPath = (string | number)[];
export type Fail = (path: FieldPath, reason: string) => never;

/** Turns the formulas of a worksheet's source into trees, and fits and results by row into columns of their table. */
export class Compiler {
	private readonly scope: Omit<FormulaScope, 'table'>;

	constructor(
		private readonly data: WorksheetSource,
		private readonly ancestors: ReadonlyMap<string, readonly string[]>,
		private readonly fail: Fail
	) {
		const byRow = new Map<string, Naming[]>();
		const add = (table: string, naming: readonly Naming[]) =>
			byRow.set(table, [...(byRow.get(table) ?? []), ...naming]);
		for (const fit of data.fits) if (fit.per !== null) add(fit.per, namingsOf(fit));
		for (const result of data.results) if (result.per !== null) add(result.per, [result]);
		const tables = new Map<string, ScopeTable>();
		for (const { name, columns } of data.tables) {
			const kinds = new Map<string, 'number' | 'text'>();
			for (const column of columns) kinds.set(column.name, column.kind === 'number' ? 'number' : 'text');
			for (const naming of byRow.get(name) ?? []) kinds.set(naming.name, 'number');
			tables.set(name, { ancestors: ancestors.get(name) ?? [], columns: kinds });
		}
		const single = [
			...data.constants,
			...data.parameters.filter(({ kind }) => kind === 'number'),
			...data.fits.filter(({ per }) => per === null).flatMap(namingsOf),
			...data.results.filter(({ per }) => per === null)
		];
		this.scope = {
			names: new Set(single.map(({ name }) => name)),
			choices: new Set(data.parameters.filter(({ kind }) => kind === 'choice').map(({ name }) => name)),
			tables
		};
	}

	private formula(parse: typeof parseValue, text: string, table: string | null, path: FieldPath): Formula {
		try {
			return parse(text, { ...this.scope, table });
		} catch (cause) {
			if (!(cause instanceof FormulaProblem)) throw cause;
			return this.fail(path, cause.message);
		}
	}

	private value(text: string, table: string | null, path: FieldPath): Formula {
		return this.formula(parseValue, text, table, path);
	}

	private condition(text: string | null, table: string | null, path: FieldPath): Formula | null {
		return text === null ? null : this.formula(parseCondition, text, table, path);
	}

	/** A mean says how it treats what is drawn anew in each row. */
	private checkPolicy(formula: Formula, policy: Policy | null, path: FieldPath): void {
		const averages = [...nodesOf(formula)].some(
			(node) => node.op === 'over' && columnFunctions[node.function]?.averages
		);
		if (averages && policy === null)
			this.fail([...path, 'policy'], 'A mean states its policy: scatter or stated.');
	}

	tables(): TableDefinition[] {
		return this.data.tables.map((table, t) => ({
			...table,
			columns: [
				...table.columns.map((column, c) => this.column(table.name, column, ['tables', t, 'columns', c])),
				...this.fittedColumns(table.name),
				...this.resultColumns(table.name)
			]
		}));
	}

	private column(
		table: string,
		column: WorksheetSource['tables'][number]['columns'][number],
		path: FieldPath
	): ColumnDefinition {
		if (column.kind === 'number' && column.unit === undefined)
			this.fail([...path, 'unit'], 'A number column states its unit, "1" for none.');
		const formula = column.formula === null ? null : this.value(column.formula, table, [...path, 'formula']);
		if (formula) this.checkPolicy(formula, column.policy, path);
		return {
			...column,
			unit: column.kind === 'number' ? (column.unit ?? '1') : '',
			formula,
			formulaText: column.formula,
			when: this.condition(column.when, table, [...path, 'when'])
		};
	}

	private fittedColumns(table: string): ColumnDefinition[] {
		return this.data.fits
			.filter(({ per }) => per === table)
			.flatMap((fit) =>
				namingsOf(fit).map((naming) => computedColumn(naming, { op: 'fitted', fit: fit.name }, fit.label))
			);
	}

	private resultColumns(table: string): ColumnDefinition[] {
		return this.data.results.flatMap((result, i) => {
			if (result.per !== table) return [];
			const path = ['results', i];
			const formula = this.value(result.formula, table, [...path, 'formula']);
			this.checkPolicy(formula, result.policy, path);
			const when = this.condition(result.when, table, [...path, 'when']);
			return [
				{ ...computedColumn(result, formula, result.formula), when, policy: result.policy, help: result.help }
			];
		});
	}

	fits(): FitDefinition[] {
		return this.data.fits.map((fit, i): FitDefinition => {
			const path = ['fits', i];
			const { name, label, model, table, per, y, weights, policy } = fit;
			const terms =
				fit.model === 'linear'
					? fit.terms.map(({ times }, t) => this.value(times, table, [...path, 'terms', t, 'times']))
					: [];
			const curve =
				fit.model === 'curve'
					? {
							formula: this.value(fit.formula, table, [...path, 'formula']),
							formulaText: fit.formula,
							starts: fit.parameters.map(({ start }, p) =>
								this.value(start, per, [...path, 'parameters', p, 'start'])
							)
						}
					: null;
			if (fit.model === 'polynomial' && fit.parameters.length !== fit.degree + 1)
				this.fail([...path, 'parameters'], `Degree ${fit.degree} has ${fit.degree + 1} parameters.`);
			return {
				name,
				label,
				model,
				table,
				per,
				where: this.condition(fit.where, table, [...path, 'where']),
				whereText: fit.where,
				x: fit.x,
				y,
				weights,
				policy,
				parameters: namingsOf(fit).map(({ name, label, symbol, unit }) => ({ name, label, symbol, unit })),
				terms,
				curve
			};
		});
	}

	results(): ResultDefinition[] {
		return this.data.results.map((result, i) => {
			const path = ['results', i];
			if (result.per === null && result.when !== null)
				this.fail([...path, 'when'], 'A single result has no condition; only results by row do.');
			const formula = this.value(result.formula, result.per, [...path, 'formula']);
			this.checkPolicy(formula, result.policy, path);
			const { name, label, symbol, unit, per, policy, headline, help } = result;
			return { name, label, symbol, unit, per, formula, formulaText: result.formula, policy, headline, help };
		});
	}

	comparisons(): ComparisonDefinition[] {
		return this.data.comparisons.map((comparison, i) => {
			const per = this.data.results.find(({ name }) => name === comparison.quantity)?.per ?? null;
			const path = ['comparisons', i];
			if ((per === null) !== (comparison.reference !== null)) {
				const field = per === null ? 'reference' : 'references';
				this.fail(
					[...path, field],
					`"${comparison.quantity}" wants ${per === null ? 'one reference' : 'references by key'}.`
				);
			}
			const read = (source: NonNullable<typeof comparison.reference>, at: FieldPath): Reference => ({
				...source,
				formula: source.formula === null ? null : this.value(source.formula, per, [...at, 'formula'])
			});
			return {
				name: comparison.name,
				quantity: comparison.quantity,
				limit: comparison.limit,
				reference: comparison.reference && read(comparison.reference, [...path, 'reference']),
				references: Object.fromEntries(
					Object.entries(comparison.references).map(([key, source]) => [
						key,
						read(source, [...path, 'references', key])
					])
				)
			};
		});
	}

	requirements(): RequirementDefinition[] {
		return this.data.requirements.map((requirement, i): RequirementDefinition => {
			if (requirement.kind !== 'check') return requirement;
			const condition = this.formula(parseCondition, requirement.condition, requirement.table, [
				'requirements',
				i,
				'condition'
			]);
			return { ...requirement, condition };
		});
	}

	mistakes(): Omit<MistakeDefinition, 'order'>[] {
		return this.data.mistakes.map(({ code, title, message, instead }, i) => {
			const read: MistakeDefinition['instead'] = { formulas: {}, constants: {}, fits: {} };
			for (const [name, replacement] of Object.entries(instead)) {
				const path = ['mistakes', i, 'instead', name];
				if (typeof replacement !== 'string') {
					if (!this.data.fits.some((fit) => fit.name === name)) this.fail(path, `There is no fit "${name}".`);
					read.fits[name] = replacement;
				} else if (this.data.constants.some((constant) => constant.name === name)) {
					read.constants[name] = this.constant(replacement, path);
				} else read.formulas[name] = this.value(replacement, this.tableComputing(name, path), path);
			}
			return { code, title, message, instead: read };
		});
	}

	private constant(text: string, path: FieldPath): { value: number; unit: string } {
		const [number = '', ...unit] = text.trim().split(/\s+/);
		const value = Number(number);
		if (number === '' || !Number.isFinite(value)) this.fail(path, `"${text}" is not a number with its unit.`);
		try {
			return { value, unit: parseUnit(unit.join(' ') || '1') && (unit.join(' ') || '1') };
		} catch (cause) {
			if (!(cause instanceof QuantityProblem)) throw cause;
			return this.fail(path, cause.message);
		}
	}

	/** The table whose rows the named formula is for; null for a single result. */
	private tableComputing(name: string, path: FieldPath): string | null {
		const result = this.data.results.find((candidate) => candidate.name === name);
		if (result) return result.per;
		const table = this.data.tables.find(({ columns }) =>
			columns.some((column) => column.name === name && column.formula !== null)
		);
		return table ? table.name : this.fail(path, `"${name}" is no computed column, result, constant or fit.`);
	}
}

function computedColumn(
	{ name, label, symbol, unit }: Naming,
	formula: Formula,
	text: string
): ColumnDefinition {
	return {
		name,
		label,
		symbol,
		kind: 'number',
		unit,
		resolution: null,
		uncertainty: [],
		required: false,
		plausible: null,
		choices: [],
		formula,
		formulaText: text,
		when: null,
		policy: null,
		of: null,
		help: ''
	};
}

/** The names a fit leaves, in the model's order. */
export function namingsOf(fit: FitSource): Naming[] {
	switch (fit.model) {
		case 'line':
		case 'both-axes':
			return [fit.slope, fit.intercept];
		case 'origin':
			return [fit.slope];
		case 'linear':
			return fit.terms;
		default:
			return fit.parameters;
	}
}

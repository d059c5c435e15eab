import { exactly, parseUnit, QuantityProblem, type Quantity, type Scope, type Source } from '$lib/quantities';
import { combine, type Averaging } from './aggregates';
import { evaluateFormula, holds, type Surroundings } from './formula';
import { nodesOf, type Leaf } from './formula-tree';
import { columnFunctions } from './functions';
import { ancestorIn, inUse, textOf, type RowState } from './rows';
import type { Rows } from './rows-at-work';
import type { ColumnDefinition, Formula, Policy, Worksheet } from './types';

/** A value that a formula needs and that is not there; its own cause has been told already. */
export class NotThere extends Error {
	constructor(readonly what: string) {
		super(what);
	}
}

/** Nodes worked out in one pass at most: some minutes of an old telephone, far beyond any experiment. */
const mostSteps = 20_000_000;

/** What the means of one formula do: the policy stated for it, and how their scatter is called. */
export interface Manner {
	policy: Policy;
	/** the name that is computed */
	id: string;
	label: string;
}

type Over = Extract<Leaf, { op: 'over' }>;

interface Kept {
	pass: number;
	columns: Quantity[][];
}

/** Where the leaves of formulas come from, for one row or for none, and what functions of columns run over. */
export class Lookup {
	private steps = 0;
	private pass = 0;
	/** names computed anew in this pass */
	readonly changedNames = new Set<string>();
	private readonly kept = new WeakMap<Over, Map<RowState | null, Kept>>();
	private readonly columns = new Map<string, ColumnDefinition>();

	constructor(
		worksheet: Worksheet,
		private readonly rows: Rows,
		private readonly names: ReadonlyMap<string, Quantity>,
		private readonly choices: ReadonlyMap<string, string>
	) {
		for (const { name, columns } of worksheet.tables)
			for (const column of columns) this.columns.set(`${name}.${column.name}`, column);
	}

	begin(): void {
		this.steps = 0;
		this.pass += 1;
		this.changedNames.clear();
	}

	at(context: RowState | null, manner: Manner): Surroundings {
		return new At(this, context, manner);
	}

	named(name: string): Quantity {
		return there(this.names.get(name), name);
	}

	hasName(name: string): boolean {
		return this.names.has(name);
	}

	chosen(name: string): string {
		return there(this.choices.get(name), name);
	}

	count(): void {
		this.steps += 1;
		if (this.steps > mostSteps) {
			throw new QuantityProblem('domain', 'This takes more steps than are allowed. Take fewer rows.');
		}
	}

	cell(context: RowState | null, table: string, column: string): Quantity | undefined {
		return context ? ancestorIn(context, table)?.values.get(column) : undefined;
	}

	over(leaf: Over, context: RowState | null, outer: Surroundings, manner: Manner): Quantity {
		const head = this.rows.familyHead(leaf.table, context);
		const columns = this.columnsOf(leaf, head, manner);
		const places = leaf.arguments.slice(columns.length).map((place) => evaluateFormula(place, outer));
		if (columns[0]?.length === 0 && leaf.function !== 'count') throw new NotThere(firstColumn(leaf));
		return combine(leaf.function, columns, places, this.averaging(leaf, head, manner));
	}

	/** The arguments in every row in use that has them and meets the condition; kept for as long as nothing changed. */
	private columnsOf(leaf: Over, head: RowState | null, manner: Manner): Quantity[][] {
		let families = this.kept.get(leaf);
		if (!families) this.kept.set(leaf, (families = new Map()));
		const known = families.get(head);
		if (known && (known.pass === this.pass || !this.changedFor(leaf, head))) {
			known.pass = this.pass;
			return known.columns;
		}
		const args = leaf.arguments.slice(0, columnFunctions[leaf.function]?.columns ?? 1);
		const columns: Quantity[][] = args.map(() => []);
		for (const row of this.rows.familyOf(leaf.table, head)) {
			if (!inUse(row)) continue;
			const values = this.valuesIn(row, args, leaf.where, manner);
			values?.forEach((value, i) => columns[i]?.push(value));
		}
		families.set(head, { pass: this.pass, columns });
		return columns;
	}

	private valuesIn(
		row: RowState,
		args: readonly Formula[],
		where: Formula | null,
		manner: Manner
	): Quantity[] | null {
		const surroundings = this.at(row, manner);
		try {
			if (where && !holds(where, surroundings)) return null;
			return args.map((argument) => evaluateFormula(argument, surroundings));
		} catch (cause) {
			if (cause instanceof NotThere) return null;
			throw cause;
		}
	}

	/** Whether a function of columns has anything new to look at. */
	changedFor(leaf: Over, head: RowState | null): boolean {
		if (this.rows.familyChanged(leaf.table, head)) return true;
		if (this.changedNames.size === 0) return false;
		for (const node of nodesOf(leaf)) {
			if ((node.op === 'name' || node.op === 'choice') && this.changedNames.has(node.name)) return true;
		}
		return false;
	}

	/** Scopes that are drawn anew in each row of a table: in a table of runs, what each run has of its own as well. */
	anewIn(table: string): ReadonlySet<Scope> {
		return this.rows.isParent(table) ? anewInRuns : anewInReadings;
	}

	private averaging(leaf: Over, head: RowState | null, { policy, id, label }: Manner): Averaging {
		const [argument] = leaf.arguments;
		const column =
			argument?.op === 'column' ? this.columns.get(`${argument.table}.${argument.column}`) : undefined;
		const repeated = column !== undefined && column.formula === null && column.resolution !== null;
		return {
			policy,
			anew: this.anewIn(leaf.table),
			id: head ? `${id}@${head.row.id}` : id,
			label: `Scatter of ${label.charAt(0).toLowerCase()}${label.slice(1)}`,
			resolution: repeated ? stepSource(column) : null,
			resolutionSize: repeated ? stepSize(column) : 0
		};
	}
}

/** The leaves of formulas at one row, or at none. */
class At implements Surroundings {
	constructor(
		private readonly lookup: Lookup,
		private readonly context: RowState | null,
		private readonly manner: Manner
	) {}

	quantity(leaf: Leaf): Quantity {
		if (leaf.op === 'name') return this.lookup.named(leaf.name);
		if (leaf.op === 'over') return this.lookup.over(leaf, this.context, this, this.manner);
		return there(this.lookup.cell(this.context, leaf.table, leaf.column), leaf.column);
	}

	text(leaf: Extract<Formula, { op: 'cell' | 'choice' }>): string {
		if (leaf.op === 'choice') return this.lookup.chosen(leaf.name);
		const row = this.context && ancestorIn(this.context, leaf.table);
		return row ? textOf(row.row.cells, leaf.column).trim() : '';
	}

	given(leaf: Leaf): boolean {
		if (leaf.op === 'name') return this.lookup.hasName(leaf.name);
		return leaf.op === 'column' && this.lookup.cell(this.context, leaf.table, leaf.column) !== undefined;
	}

	step(): void {
		this.lookup.count();
	}
}

const anewInReadings: ReadonlySet<Scope> = new Set(['reading']);
const anewInRuns: ReadonlySet<Scope> = new Set(['reading', 'run']);

function there<T>(value: T | undefined, what: string): T {
	if (value === undefined) throw new NotThere(what);
	return value;
}

function firstColumn(leaf: Over): string {
	for (const node of nodesOf(leaf)) if (node.op === 'column') return node.column;
	return leaf.function;
}

function stepSource(column: ColumnDefinition): Source {
	const label = `Resolution of ${column.label.charAt(0).toLowerCase()}${column.label.slice(1)}`;
	return { component: { id: `${column.name}:step`, label, scope: 'instrument', degreesOfFreedom: Infinity } };
}

/** Rectangular over the digital step, SI. */
function stepSize({ resolution, unit }: ColumnDefinition): number {
	return exactly(Number(resolution), { ...parseUnit(unit), offset: 0 }).value / Math.sqrt(12);
}

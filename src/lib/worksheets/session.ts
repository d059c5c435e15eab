import {
	exactly,
	intervalUnit,
	parseTypedNumber,
	parseUnit,
	QuantityProblem,
	toldIn,
	withDeviations,
	type Component,
	type Quantity
} from '$lib/quantities';
import { computeFit, type Fitted } from './fit-step';
import { evaluateFormula, holds, type Surroundings } from './formula';
import { nodesOf } from './formula-tree';
import { Lookup, NotThere, type Manner } from './lookup';
import { findColumn, labelOf } from './naming';
import { readParameters, type ReadParameter } from './parameters';
import { ancestorIn, textOf, unknownNames, type RowState } from './rows';
import { Rows } from './rows-at-work';
import { Sources } from './sources';
import type {
	CarriedValue,
	ColumnDefinition,
	FitDefinition,
	Formula,
	Problem,
	Readings,
	ResultDefinition,
	Worksheet,
	WorksheetStep
} from './types';

/** What one pass does at one step: the formulas it looks at. */
interface StepFacts {
	step: WorksheetStep;
	column: ColumnDefinition | null;
	fit: FitDefinition | null;
	result: ResultDefinition | null;
	formulas: readonly Formula[];
}

/**
 * A worksheet at work: everything computed from the readings, before any of it is shown. It is kept from one state of the
 * readings to the next and computes anew only what an edit touches; what comes out is what a fresh one would say.
 */
export class Session {
	readonly rows: Rows;
	readonly sources = new Sources();
	parameters: ReadonlyMap<string, ReadParameter> = new Map();
	readonly choices = new Map<string, string>();
	/** constants, parameters, single results and single fits' parameters */
	readonly names = new Map<string, Quantity>();
	/** by name, and for a fit by row by "name row-id" */
	readonly fits = new Map<string, Fitted>();
	problems: Problem[] = [];
	private readonly lookup: Lookup;
	private readonly facts: readonly StepFacts[];
	/** step -> row, or the whole of it -> what it found wrong */
	private readonly found = new Map<StepFacts, Map<RowState | null, Problem>>();
	private carried: ReadonlyMap<string, CarriedValue> = new Map();
	private fresh = true;

	constructor(readonly worksheet: Worksheet) {
		this.rows = new Rows(worksheet);
		this.lookup = new Lookup(worksheet, this.rows, this.names, this.choices);
		this.facts = worksheet.order.map((step) => factsOf(worksheet, step));
		for (const constant of worksheet.constants) this.names.set(constant.name, constantQuantity(constant));
	}

	/** Takes over the readings as they are now, and values stated in place of computed ones. */
	take(readings: Readings, carried: readonly CarriedValue[] = []): void {
		this.takeCarried(carried);
		this.lookup.begin();
		this.rows.read(readings, this.sources);
		const before = this.parameters;
		const read = readParameters(this.worksheet, readings, before, this.sources);
		this.parameters = read.parameters;
		for (const { name, kind } of this.worksheet.parameters) {
			const parameter = read.parameters.get(name);
			if (parameter === before.get(name)) continue;
			this.lookup.changedNames.add(name);
			if (kind === 'choice') setOrDelete(this.choices, name, parameter?.choice ?? undefined);
			else setOrDelete(this.names, name, parameter?.quantity ?? undefined);
		}
		for (const facts of this.facts) {
			if (facts.column) this.computeColumn(facts, facts.column);
			else if (facts.fit) this.computeFits(facts, facts.fit);
			else if (facts.result) this.computeResult(facts, facts.result);
		}
		this.fresh = false;
		this.problems = this.gatherProblems(read.problems, readings);
	}

	/** Where the leaves of a formula come from that is no step: a requirement's, a reference's. */
	surroundings(row: RowState | null): Surroundings {
		return this.lookup.at(row, { policy: 'stated', id: '', label: '' });
	}

	/** The same for the formula of a named column or result, whose means follow its policy. */
	surroundingsOf(name: string, row: RowState | null): Surroundings {
		const facts = this.facts.find(({ column, result }) => (column ?? result)?.name === name);
		return facts ? this.lookup.at(row, this.manner(facts)) : this.surroundings(row);
	}

	/** 'Row 3', or 'run B' where the table has keys. */
	callRow(row: RowState): string {
		const key = this.worksheet.tables.find(({ name }) => name === row.table)?.key ?? null;
		const text = key === null ? '' : textOf(row.row.cells, key).trim();
		if (key === null || text === '') return `Row ${row.number}`;
		const label = findColumn(this.worksheet, row.table, key)?.label ?? key;
		return `${label} ${text}`;
	}

	/** Everything is computed anew when what is stated in place of computed values changes: it does so seldom. */
	private takeCarried(carried: readonly CarriedValue[]): void {
		const next = new Map(carried.map((value) => [carriedKey(value.name, value.row), value]));
		const same =
			next.size === this.carried.size &&
			[...next].every(([key, value]) => this.carried.get(key)?.text === value.text);
		if (!same) this.fresh = true;
		this.carried = next;
	}

	private manner(facts: StepFacts): Manner {
		const { column, result, fit } = facts;
		const policy = column?.policy ?? result?.policy ?? fit?.policy ?? 'stated';
		const subject = column ?? result ?? fit;
		return { policy, id: subject?.name ?? '', label: subject?.label ?? '' };
	}

	private computeColumn(facts: StepFacts, column: ColumnDefinition): void {
		if (facts.step.kind !== 'column' || !column.formula) return;
		const { table, local } = facts.step;
		const unit = parseUnit(column.unit);
		const manner = this.manner(facts);
		const found = this.foundAt(facts);
		for (const row of this.touched(facts, table)) {
			found.delete(row);
			row.failed?.delete(column.name);
			row.cellProblems?.delete(column.name);
			row.values.delete(column.name);
			this.rows.mark(row);
			if (row.blank) continue;
			try {
				const surroundings = this.lookup.at(row, manner);
				if (column.when && !holds(column.when, surroundings)) continue;
				const carried = this.carriedFor(column, row);
				row.values.set(column.name, carried ?? toldIn(evaluateFormula(column.formula, surroundings), unit));
			} catch (cause) {
				const problem = this.columnProblem(facts, column, row, cause);
				if (problem) found.set(row, problem);
				if (local && (cause instanceof QuantityProblem || this.isParameter(cause)))
					(row.failed ??= new Set()).add(column.name);
			}
		}
	}

	private isParameter(cause: unknown): boolean {
		return cause instanceof NotThere && this.worksheet.parameters.some(({ name }) => name === cause.what);
	}

	private columnProblem(
		facts: StepFacts,
		column: ColumnDefinition,
		row: RowState,
		cause: unknown
	): Problem | null {
		const place = { table: row.table, column: column.name };
		if (cause instanceof QuantityProblem) {
			const message = `Row ${row.number}, ${column.name}: ${cause.message}`;
			(row.cellProblems ??= new Map()).set(column.name, message);
			return { severity: 'error', code: cause.code, message, ...place, row: row.row.id };
		}
		if (!(cause instanceof NotThere)) throw cause;
		if (!this.isParameter(cause)) return null;
		const message = `${column.label} waits for ${labelOf(this.worksheet, cause.what)}.`;
		return { severity: 'error', code: 'waits', message, ...place, parameter: cause.what };
	}

	/** Rows of `table` in which a step has something new to look at. */
	private touched(facts: StepFacts, table: string): Iterable<RowState> {
		const all = this.rows.tables.get(table) ?? [];
		if (this.fresh) return all;
		const touched = new Set(this.rows.changedIn(table));
		for (const formula of facts.formulas) {
			for (const node of nodesOf(formula)) {
				if ((node.op === 'name' || node.op === 'choice') && this.lookup.changedNames.has(node.name))
					return all;
				const elsewhere =
					node.op === 'over' || node.op === 'column' || node.op === 'cell' ? node.table : table;
				if (elsewhere === table && node.op !== 'over') continue;
				for (const other of elsewhere === table ? [table, ...this.rows.ancestorsOf(table)] : [elsewhere]) {
					// a row that left its family shows in the head that it left
					for (const changed of this.touchedBy(other, table)) {
						if (changed === null) return all;
						touched.add(changed);
					}
				}
			}
		}
		return touched;
	}

	/** Rows of `table` that look at rows of another table, or of their own kind, which changed; null for all of them. */
	private *touchedBy(other: string, table: string): Generator<RowState | null> {
		if (this.rows.reshaped.has(other) && !this.rows.ancestorsOf(other).includes(table)) yield null;
		for (const changed of this.rows.changedIn(other)) {
			if (other === table) {
				const [parent] = changed.parents.values();
				if (!parent) yield null;
				else yield* this.rows.familyOf(table, parent);
			} else if (this.rows.ancestorsOf(other).includes(table)) {
				const head = ancestorIn(changed, table);
				if (head) yield head;
			} else if (this.rows.ancestorsOf(table).includes(other)) yield* this.rows.familyOf(table, changed);
			else yield null;
		}
	}

	private computeFits(facts: StepFacts, fit: FitDefinition): void {
		const found = this.foundAt(facts);
		const heads: Iterable<RowState | null> =
			fit.per === null ? this.single(facts, fit.table) : this.heads(facts, fit);
		for (const head of heads) {
			const key = head ? `${fit.name} ${head.row.id}` : fit.name;
			found.delete(head);
			const set = (i: number, value: Quantity | undefined) => {
				const name = fit.parameters[i]?.name ?? '';
				if (head) setOrDelete(head.values, name, value);
				else {
					this.lookup.changedNames.add(name);
					setOrDelete(this.names, name, value);
				}
			};
			if (head) this.rows.mark(head);
			const fitted = head?.blank === true ? null : computeFit(fit, head, this.rows, this.lookup);
			const there = fitted && 'fit' in fitted ? fitted : null;
			if (there) this.fits.set(key, there);
			else this.fits.delete(key);
			// a row that takes no part at all lacks nothing
			if (fitted && !('fit' in fitted) && (!head || head.row.status === 'used')) found.set(head, fitted);
			fit.parameters.forEach((parameter, i) => {
				const carried = this.carriedFor(parameter, head);
				set(i, carried ?? there?.fit.parameters[i]);
			});
		}
	}

	private heads(facts: StepFacts, fit: FitDefinition): Iterable<RowState> {
		const per = fit.per ?? '';
		const heads = new Set(this.touched(facts, per));
		if (this.fresh) return heads;
		for (const changed of this.rows.changedIn(fit.table)) {
			const head = ancestorIn(changed, per);
			if (head) heads.add(head);
		}
		return heads;
	}

	private single(facts: StepFacts, table: string | null): (RowState | null)[] {
		if (this.fresh || (table !== null && this.rows.familyChanged(table, null))) return [null];
		for (const formula of facts.formulas) {
			for (const node of nodesOf(formula)) {
				if ((node.op === 'name' || node.op === 'choice') && this.lookup.changedNames.has(node.name))
					return [null];
				if (node.op === 'over' && this.lookup.changedFor(node, null)) return [null];
			}
		}
		return [];
	}

	private computeResult(facts: StepFacts, result: ResultDefinition): void {
		const found = this.foundAt(facts);
		if (this.single(facts, null).length === 0) return;
		found.delete(null);
		this.lookup.changedNames.add(result.name);
		try {
			const carried = this.carriedFor(result, null);
			const surroundings = this.lookup.at(null, this.manner(facts));
			const value = carried ?? toldIn(evaluateFormula(result.formula, surroundings), parseUnit(result.unit));
			this.names.set(result.name, value);
		} catch (cause) {
			this.names.delete(result.name);
			found.set(null, this.resultProblem(result, cause));
		}
	}

	private resultProblem({ name, label }: ResultDefinition, cause: unknown): Problem {
		if (cause instanceof NotThere) {
			const message = `${label} is not computed yet: it waits for ${labelOf(this.worksheet, cause.what)}.`;
			return { severity: 'note', code: 'waits', message, name };
		}
		if (cause instanceof QuantityProblem) {
			return { severity: 'error', code: cause.code, message: `${label}: ${cause.message}`, name };
		}
		throw cause;
	}

	private carriedFor(
		{ name, label, unit }: { name: string; label: string; unit: string },
		row: RowState | null
	) {
		const value = this.carried.get(carriedKey(name, row?.row.id));
		return value ? carriedQuantity(value, label, unit) : null;
	}

	private foundAt(facts: StepFacts): Map<RowState | null, Problem> {
		let found = this.found.get(facts);
		if (!found) this.found.set(facts, (found = new Map()));
		return found;
	}

	/** In the order of parameters, rows, then steps; a wait that many rows share is told once. */
	private gatherProblems(ofParameters: readonly Problem[], readings: Readings): Problem[] {
		const problems = [...ofParameters];
		for (const rows of this.rows.tables.values())
			for (const row of rows) if (row.problems) problems.push(...row.problems);
		problems.push(...unknownNames(this.worksheet, readings, this.rows.unknownColumns()));
		for (const facts of this.facts) {
			const found = [...(this.found.get(facts) ?? [])].filter(([row]) => row === null || this.isHere(row));
			found.sort(([a], [b]) => (a?.number ?? 0) - (b?.number ?? 0));
			const told = new Set<string>();
			for (const [, problem] of found) {
				if (told.has(problem.message)) continue;
				told.add(problem.message);
				problems.push(problem);
			}
		}
		return problems;
	}

	private isHere(row: RowState): boolean {
		return this.rows.tables.get(row.table)?.[row.number - 1] === row;
	}
}

function factsOf(worksheet: Worksheet, step: WorksheetStep): StepFacts {
	const none = { step, column: null, fit: null, result: null };
	if (step.kind === 'column') {
		const table = worksheet.tables.find(({ name }) => name === step.table);
		const column = table?.columns.find(({ name }) => name === step.column) ?? null;
		const formulas = [column?.formula, column?.when].filter((formula) => formula != null);
		return { ...none, column, formulas };
	}
	if (step.kind === 'fit') {
		const fit = worksheet.fits.find(({ name }) => name === step.name) ?? null;
		const curve = fit?.curve ? [fit.curve.formula, ...fit.curve.starts] : [];
		const own = new Set(fit?.parameters.map(({ name }) => name));
		const named = [fit?.where, ...(fit?.terms ?? []), ...curve].filter((formula) => formula != null);
		// the fit's own parameters stand in its formula without being looked up
		return { ...none, fit, formulas: named.map((formula) => withoutOwn(formula, own)) };
	}
	const result = worksheet.results.find(({ name }) => name === step.name) ?? null;
	return { ...none, result, formulas: result ? [result.formula] : [] };
}

function withoutOwn(formula: Formula, own: ReadonlySet<string>): Formula {
	const leaves = [...nodesOf(formula)].filter((node) => {
		if (node.op === 'name') return !own.has(node.name);
		if (node.op === 'column') return !own.has(node.column);
		return node.op === 'over' || node.op === 'choice' || node.op === 'cell';
	});
	return { op: 'call', function: '', arguments: leaves };
}

function constantQuantity(constant: Worksheet['constants'][number]): Quantity {
	const unit = parseUnit(constant.unit);
	const quantity = { ...exactly(constant.value, unit), point: false };
	if (constant.standardUncertainty === null) return quantity;
	const { name: id, label } = constant;
	const component: Component = { id, label, scope: 'course', degreesOfFreedom: Infinity };
	return withDeviations(quantity, [[{ component }, constant.standardUncertainty * unit.factor]]);
}

function carriedKey(name: string, row: string | undefined): string {
	return row === undefined ? name : `${name} ${row}`;
}

/** A stated value with the uncertainty stated beside it, as a source of its own. */
function carriedQuantity(value: CarriedValue, label: string, unitName: string): Quantity | null {
	const reading = parseTypedNumber(value.text);
	if (reading.kind !== 'number') return null;
	const unit = parseUnit(unitName);
	const quantity = exactly(reading.number.value, unit);
	const { standardUncertainty } = reading.number;
	if (standardUncertainty === null) return quantity;
	const component: Component = {
		id: `${carriedKey(value.name, value.row)}:stated`,
		label: `${label}, as stated`,
		scope: 'run',
		degreesOfFreedom: Infinity
	};
	return withDeviations(quantity, [[{ component }, standardUncertainty * intervalUnit(unit).factor]]);
}

function setOrDelete<K, V>(map: Map<K, V>, key: K, value: V | undefined): void {
	if (value === undefined) map.delete(key);
	else map.set(key, value);
}

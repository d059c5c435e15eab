import { parseUnit, QuantityProblem, toldIn, type Quantity } from '$lib/quantities';
import { FitProblem } from '$lib/regression';
import { ownSources } from './aggregates';
import { fitPoints, OwnOfRuns, type Fit, type Points } from './fitted';
import { evaluateFormula, holds } from './formula';
import { NotThere, type Lookup, type Manner } from './lookup';
import { inputLeaves } from './model';
import { inUse, type RowState } from './rows';
import type { Rows } from './rows-at-work';
import type { FitDefinition, Problem } from './types';

/** A fit with the rows it runs over. */
export interface Fitted {
	definition: FitDefinition;
	/** the row it goes by; null for a single fit */
	head: RowState | null;
	rows: readonly RowState[];
	fit: Fit;
}

/** The fit for one row of the table it goes by, or the only one; or why there is none. */
export function computeFit(
	definition: FitDefinition,
	head: RowState | null,
	rows: Rows,
	lookup: Lookup
): Fitted | Problem {
	const manner: Manner = { policy: definition.policy, id: definition.name, label: definition.label };
	const id = head ? `${definition.name}@${head.row.id}` : definition.name;
	try {
		const { points, used } = gather(definition, head, rows, lookup, manner);
		if (!rows.isParent(definition.table))
			return { definition, head, rows: used, fit: fitPoints(definition, points, id) };
		const { x, y, terms, inputs } = points;
		const axes = [x, y, ...terms, ...inputs];
		const items = y.map((_, i) => axes.flatMap((axis) => axis[i] ?? []));
		const own = new OwnOfRuns(ownSources(items, lookup.anewIn(definition.table)));
		const enter = (values: readonly Quantity[]) => values.map((value) => own.enter(value));
		const entered = {
			...points,
			x: enter(x),
			y: enter(y),
			terms: terms.map(enter),
			inputs: inputs.map(enter)
		};
		const fit = fitPoints(definition, entered, id);
		return {
			definition,
			head,
			rows: used,
			fit: { ...fit, parameters: fit.parameters.map((each) => own.leave(each)) }
		};
	} catch (cause) {
		return fitProblem(definition, head, cause);
	}
}

function gather(
	definition: FitDefinition,
	head: RowState | null,
	rows: Rows,
	lookup: Lookup,
	manner: Manner
): { points: Points; used: RowState[] } {
	const used: RowState[] = [];
	const x: Quantity[] = [];
	const y: Quantity[] = [];
	const terms: Quantity[][] = definition.terms.map(() => []);
	const leaves = inputLeaves(definition);
	const inputs: Quantity[][] = leaves.map(() => []);
	const weights: number[] | null =
		definition.weights === 'equal' || definition.weights === 'stated' ? null : [];
	for (const row of rows.familyOf(definition.table, head)) {
		if (!inUse(row)) continue;
		const valueY = row.values.get(definition.y);
		const valueX = definition.x === null ? undefined : row.values.get(definition.x);
		if (!valueY || (definition.x !== null && !valueX)) continue;
		const surroundings = lookup.at(row, manner);
		try {
			if (definition.where && !holds(definition.where, surroundings)) continue;
			const ofTerms = definition.terms.map((term) => evaluateFormula(term, surroundings));
			const ofInputs = leaves.map((leaf) => surroundings.quantity(leaf));
			const weight = weights && row.values.get(definition.weights);
			if (weights && !weight) continue;
			if (weight && !(weight.value > 0)) {
				throw new FitProblem('no-stated-uncertainty', 'A weight is not above zero. Look at its column.');
			}
			if (weight) weights?.push(weight.value);
			if (valueX) x.push(valueX);
			y.push(valueY);
			ofTerms.forEach((value, k) => terms[k]?.push(value));
			ofInputs.forEach((value, k) => inputs[k]?.push(value));
			used.push(row);
		} catch (cause) {
			// a name that is missing is missing for every row; a cell only for its own
			if (
				!(cause instanceof NotThere) ||
				leaves.some((leaf) => leaf.op === 'name' && leaf.name === cause.what)
			)
				throw cause;
		}
	}
	if (used.length === 0) throw new NotThere('');
	const surroundings = lookup.at(head, manner);
	const starts = (definition.curve?.starts ?? []).map((start, i) =>
		toldIn(evaluateFormula(start, surroundings), parseUnit(definition.parameters[i]?.unit ?? '1'))
	);
	return { points: { x, y, terms, inputs, weights, starts }, used };
}

function fitProblem(definition: FitDefinition, head: RowState | null, cause: unknown): Problem {
	const where = head ? { name: definition.name, group: head.row.id } : { name: definition.name };
	if (cause instanceof NotThere) {
		if (cause.what !== '') {
			const message = `${definition.label} waits for ${cause.what}.`;
			return { severity: 'note', code: 'waits', message, ...where };
		}
		const message = `${definition.label}: no complete row yet. Type, paste or upload readings.`;
		return { severity: 'error', code: 'too-few-points', message, ...where };
	}
	if (cause instanceof FitProblem || cause instanceof QuantityProblem) {
		const message = `${definition.label}: ${cause.message}`;
		return { severity: 'error', code: cause.code, message, ...where };
	}
	throw cause;
}

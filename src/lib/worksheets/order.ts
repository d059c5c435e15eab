import { nodesOf } from './formula-tree';
import type { Formula, Worksheet, WorksheetStep } from './types';

interface Step {
	step: WorksheetStep;
	needs: string[];
	/** names of its own that its formulas may use: a curve's parameters */
	own: Set<string>;
}

/**
 * Each step after everything it needs, otherwise in the author's order, and the columns that rest on their row's own
 * readings first: whether a row is in use is known before anything looks at several rows. Or the names that need each
 * other in a circle.
 */
export function orderSteps(
	worksheet: Omit<Worksheet, 'order' | 'mistakes'>
): { order: WorksheetStep[] } | { cycle: string[] } {
	const { steps, producers } = stepsOf(worksheet);
	markLocal(worksheet, steps, producers);
	const order: WorksheetStep[] = [];
	const state = new Map<string, 'under way' | 'done'>();
	const visit = (id: string, trail: string[]): string[] | null => {
		const entry = steps.get(id);
		if (!entry || state.get(id) === 'done') return null;
		if (state.get(id) === 'under way') return [...trail.slice(trail.indexOf(id)), id];
		state.set(id, 'under way');
		for (const need of entry.needs) {
			const cycle = visit(producers.get(need) ?? need, [...trail, id]);
			if (cycle) return cycle;
		}
		state.set(id, 'done');
		order.push(entry.step);
		return null;
	};
	const isLocal = (id: string) => {
		const step = steps.get(id)?.step;
		return step?.kind === 'column' && step.local;
	};
	const ids = [...steps.keys()];
	for (const id of [...ids.filter(isLocal), ...ids]) {
		const cycle = visit(id, []);
		if (cycle) return { cycle: cycle.map((name) => name.replace(/^\w+ |^.*\./, '')) };
	}
	return { order };
}

function stepsOf(worksheet: Omit<Worksheet, 'order' | 'mistakes'>) {
	const steps = new Map<string, Step>();
	const producers = new Map<string, string>();
	for (const { name: table, columns } of worksheet.tables) {
		for (const { name: column, formula, when } of columns) {
			if (formula === null || formula.op === 'fitted') continue;
			steps.set(`${table}.${column}`, {
				step: { kind: 'column', table, column, local: false },
				needs: needsOf([formula, when]),
				own: new Set()
			});
		}
	}
	for (const fit of worksheet.fits) {
		const { table, x, y, weights } = fit;
		const axes = [x, y, weights === 'equal' || weights === 'stated' ? null : weights];
		const formulas = [
			fit.where,
			...fit.terms,
			...(fit.curve ? [fit.curve.formula, ...fit.curve.starts] : [])
		];
		const own = new Set(fit.parameters.map(({ name }) => (fit.per === null ? name : `${fit.per}.${name}`)));
		const needs = [
			...axes.flatMap((column) => (column === null ? [] : `${table}.${column}`)),
			...needsOf(formulas)
		];
		const id = `fit ${fit.name}`;
		steps.set(id, {
			step: { kind: 'fit', name: fit.name },
			needs: needs.filter((need) => !own.has(need)),
			own
		});
		for (const name of own) producers.set(name, id);
	}
	for (const { name, per, formula } of worksheet.results) {
		if (per !== null) continue;
		const id = `result ${name}`;
		steps.set(id, { step: { kind: 'result', name }, needs: needsOf([formula]), own: new Set() });
		producers.set(name, id);
	}
	return { steps, producers };
}

function needsOf(formulas: readonly (Formula | null)[]): string[] {
	const needs = new Set<string>();
	for (const formula of formulas) {
		for (const node of formula ? nodesOf(formula) : []) {
			if (node.op === 'column') needs.add(`${node.table}.${node.column}`);
			else if (node.op === 'name') needs.add(node.name);
		}
	}
	return [...needs];
}

/** A column is local when it needs neither several rows nor anything that does. */
function markLocal(
	worksheet: Omit<Worksheet, 'order' | 'mistakes'>,
	steps: Map<string, Step>,
	producers: Map<string, string>
): void {
	const formulas = new Map<string, Formula[]>();
	for (const { name, columns } of worksheet.tables) {
		for (const { name: column, formula, when } of columns)
			formulas.set(
				`${name}.${column}`,
				[formula, when].filter((each) => each !== null)
			);
	}
	const known = new Map<string, boolean>();
	const isLocal = (id: string): boolean => {
		const before = known.get(id);
		if (before !== undefined) return before;
		known.set(id, false); // a circle is never local
		const entry = steps.get(id);
		const own = formulas.get(id) ?? [];
		const local =
			!producers.has(id) &&
			own.every((formula) => [...nodesOf(formula)].every(({ op }) => op !== 'over' && op !== 'fitted')) &&
			(entry?.needs ?? []).every(isLocal);
		known.set(id, local);
		return local;
	};
	for (const [id, { step }] of steps) if (step.kind === 'column') step.local = isLocal(id);
}

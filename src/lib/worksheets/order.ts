import { dependenciesOf } from './formula';
import type { Formula, Worksheet, WorksheetStep } from './types';

/** Each step after everything it needs, otherwise in the author's order; or the names that need each other in a circle. */
export function orderSteps(worksheet: Worksheet): { order: WorksheetStep[] } | { cycle: string[] } {
	const steps = new Map<string, { step: WorksheetStep; needs: string[] }>();
	const producers = new Map<string, string>();
	for (const table of worksheet.tables) {
		for (const column of table.columns) {
			if (!column.formula) continue;
			const id = `${table.name}.${column.name}`;
			steps.set(id, {
				step: { kind: 'column', table: table.name, column: column.name },
				needs: needsOf(column.formula)
			});
		}
	}
	for (const fit of worksheet.fits) {
		steps.set(fit.name, {
			step: { kind: 'fit', name: fit.name },
			needs: [`${fit.table}.${fit.x}`, `${fit.table}.${fit.y}`]
		});
		producers.set(fit.slope.name, fit.name).set(fit.intercept.name, fit.name);
	}
	for (const result of worksheet.results) {
		steps.set(`result ${result.name}`, {
			step: { kind: 'result', name: result.name },
			needs: needsOf(result.formula)
		});
		producers.set(result.name, `result ${result.name}`);
	}
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
	for (const id of steps.keys()) {
		const cycle = visit(id, []);
		if (cycle) return { cycle: cycle.map((name) => name.replace(/^result |^.*\./, '')) };
	}
	return { order };
}

function needsOf(formula: Formula): string[] {
	return dependenciesOf(formula).map((leaf) =>
		leaf.op === 'column' ? `${leaf.table}.${leaf.column}` : leaf.op === 'name' ? leaf.name : ''
	);
}

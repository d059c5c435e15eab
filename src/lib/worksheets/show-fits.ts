import { covariance, differenceIn, intervalUnit, parseUnit, type Quantity } from '$lib/quantities';
import type { Fitted } from './fit-step';
import { keyOf, namingFor, rowSlugs } from './named';
import { findColumn } from './naming';
import type { RowState } from './rows';
import type { Session } from './session';
import { showQuantity } from './shown';
import type { FitDefinition, ShownFit } from './types';

/** Every fit that could be computed, under its name, or its name and the row's. */
export function showFits(session: Session, kept: WeakMap<Fitted, ShownFit>): Record<string, ShownFit> {
	const fits: Record<string, ShownFit> = {};
	for (const { name, fitted, group } of fitsByName(session)) {
		let shown = kept.get(fitted);
		if (shown?.name !== name) kept.set(fitted, (shown = showFit(session, fitted, name, group)));
		fits[name] = shown;
	}
	return fits;
}

export interface NamedFit {
	/** 'line', 'line.argon' */
	name: string;
	/** key of the row */
	group: string | null;
	row: RowState | null;
	fitted: Fitted;
}

/** The fits there are, in the experiment's order and that of the rows. */
export function* fitsByName(session: Session): Generator<NamedFit> {
	for (const definition of session.worksheet.fits) {
		if (definition.per === null) {
			const fitted = session.fits.get(definition.name);
			if (fitted) yield { name: definition.name, group: null, row: null, fitted };
			continue;
		}
		for (const [row, slug] of rowSlugs(session, definition.per)) {
			const fitted = session.fits.get(`${definition.name} ${row.row.id}`);
			if (!fitted) continue;
			yield { name: `${definition.name}.${slug}`, group: keyOf(session.worksheet, row), row, fitted };
		}
	}
}

function showFit(session: Session, fitted: Fitted, name: string, group: string | null): ShownFit {
	const { definition, fit, head } = fitted;
	const suffix = name.slice(definition.name.length);
	const parameters = fit.parameters.map((quantity, i) => {
		const naming = definition.parameters[i];
		if (!naming) throw new Error(`${definition.name} has no parameter ${i + 1}.`);
		return {
			quantity,
			naming: namingFor({ name: `${naming.name}${suffix}`, group, row: head, naming, quantity })
		};
	});
	const size = (quantity: Quantity) => intervalUnit(quantity.unit).factor;
	return {
		name,
		...(group === null ? {} : { group }),
		label: group === null ? definition.label : `${definition.label}, ${group}`,
		model: definition.model,
		policy: definition.policy,
		points: fit.points,
		degreesOfFreedom: fit.degreesOfFreedom,
		residualStandardDeviation: residualDeviation(session, fitted),
		chiSquared: fit.chiSquared,
		parameters: parameters.map(({ quantity, naming }) => showQuantity(quantity, naming)),
		covariance: fit.parameters.map((a) => fit.parameters.map((b) => covariance(a, b) / (size(a) * size(b)))),
		iterations: fit.iterations,
		sentence: policySentence(definition, fit.degreesOfFreedom)
	};
}

/** In the unit of the y column when all points weigh the same, else of unit weight and without unit. */
function residualDeviation(session: Session, { definition, fit }: Fitted): number | null {
	if (fit.residualStandardDeviation === null || definition.weights === 'stated')
		return fit.residualStandardDeviation;
	const column = findColumn(session.worksheet, definition.table, definition.y);
	return column ? differenceIn(fit.residualStandardDeviation, parseUnit(column.unit)) : null;
}

function policySentence({ model, weights, policy }: FitDefinition, degreesOfFreedom: number): string {
	const line = model === 'curve' ? 'curve' : 'line';
	const by =
		model === 'both-axes'
			? 'Points are weighted by the uncertainty of both axes.'
			: weights === 'equal'
				? 'All points weigh the same.'
				: weights === 'stated'
					? 'Points are weighted by their stated uncertainty.'
					: 'Points have the weights that the experiment states.';
	if (policy === 'scatter') {
		return `${by} The uncertainty of the ${line} comes from the scatter of the points about it (${degreesOfFreedom} degrees of freedom), with the shared uncertainty of the instruments on top.`;
	}
	return `${by} The uncertainty of the ${line} comes from the stated uncertainty of the readings; chi-squared tells whether the scatter bears it out.`;
}

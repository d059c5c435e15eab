import type { Evaluation, Problem, ShownComparison, ShownQuantity, Worksheet } from '$lib/worksheets';

/** What programs read; units as in the experiment, nothing rounded but `display`. */
export interface Described {
	results: {
		name: string;
		group: string | null;
		value: number;
		unit: string;
		standardUncertainty: number | null;
		degreesOfFreedom: number | null;
		expanded95: number | null;
		display: string;
	}[];
	comparisons: {
		result: string;
		group: string | null;
		reference: number;
		difference: number;
		standardUncertainty: number;
		normalisedError: number | null;
		verdict: ShownComparison['verdict'];
	}[];
	fits: {
		name: string;
		group: string | null;
		model: string;
		policy: string;
		points: number;
		degreesOfFreedom: number;
		residualStandardDeviation: number | null;
		chiSquared: number | null;
		parameters: Described['results'];
		covariance: number[][];
	}[];
	problems: {
		severity: Problem['severity'];
		code: string;
		message: string;
		table: string | null;
		row: string | null;
		column: string | null;
	}[];
}

export function describe(worksheet: Worksheet, evaluation: Evaluation): Described {
	const results = new Set(worksheet.results.map(({ name }) => name));
	return {
		results: Object.values(evaluation.quantities)
			.filter(({ name }) => results.has(bare(name)))
			.map(described),
		comparisons: Object.values(evaluation.comparisons).map((comparison) => ({
			result: comparison.quantity,
			group: comparison.group ?? null,
			reference: comparison.reference.value,
			difference: comparison.difference,
			standardUncertainty: comparison.standardUncertainty,
			normalisedError: comparison.normalisedError,
			verdict: comparison.verdict
		})),
		fits: Object.values(evaluation.fits).map((fit) => ({
			name: bare(fit.name),
			group: fit.group ?? null,
			model: fit.model,
			policy: fit.policy,
			points: fit.points,
			degreesOfFreedom: fit.degreesOfFreedom,
			residualStandardDeviation: fit.residualStandardDeviation,
			chiSquared: fit.chiSquared,
			parameters: fit.parameters.map(described),
			covariance: fit.covariance
		})),
		problems: evaluation.problems.map(({ severity, code, message, table, row, column }) => ({
			severity,
			code,
			message,
			table: table ?? null,
			row: row ?? null,
			column: column ?? null
		}))
	};
}

/** 'gamma.argon' is the result gamma of the group argon. */
function bare(name: string): string {
	return name.replace(/\..*$/, '');
}

function described(quantity: ShownQuantity): Described['results'][number] {
	const { name, group, value, unit, standardUncertainty, degreesOfFreedom, expanded95, display } = quantity;
	return {
		name: bare(name),
		group: group ?? null,
		value,
		unit,
		standardUncertainty,
		degreesOfFreedom,
		expanded95,
		display: display.text
	};
}

import type { BudgetLine, Evaluation, SampleCalculation, ShownQuantity, Worksheet } from '$lib/worksheets';
import type { Described } from './describe';

/** The same for reading: results, comparisons, fits, sample calculations, problems. */
export function report(worksheet: Worksheet, evaluation: Evaluation, { problems }: Described): string {
	const results = new Set(worksheet.results.map(({ name }) => name));
	const quantities = Object.values(evaluation.quantities).filter(({ name }) =>
		results.has(name.replace(/\..*$/, ''))
	);
	const parts = [
		heading(worksheet.title, '='),
		section('Results', quantities.map(result)),
		section(
			'Comparisons',
			Object.values(evaluation.comparisons).map(
				({ quantity, group, sentence, reference }) =>
					`${quantity}${group === undefined ? '' : ` (${group})`}: ${sentence}\n  ${reference.conditions}. ${reference.source}`
			)
		),
		section(
			'Fits',
			Object.values(evaluation.fits).map(
				(fit) =>
					`${fit.label}: ${fit.points} points, ${fit.degreesOfFreedom} degrees of freedom${fit.chiSquared === null ? '' : `, chi-squared ${fit.chiSquared.toFixed(1)}`}\n${fit.parameters
						.map(({ label, display }) => `  ${label}: ${display.text}`)
						.join('\n')}\n  ${fit.sentence}`
			)
		),
		section('Sample calculations', Object.values(evaluation.workings).map(calculation)),
		section(
			'Problems',
			problems.map(({ severity, message }) => `${severity}: ${message}`)
		)
	];
	return `${parts.filter((part) => part !== '').join('\n')}`;
}

function heading(text: string, rule: string): string {
	return `${text}\n${rule.repeat(text.length)}\n`;
}

function section(title: string, entries: readonly string[]): string {
	return entries.length === 0 ? '' : `${heading(title, '-')}${entries.join('\n')}\n`;
}

function result({
	name,
	label,
	display,
	degreesOfFreedom,
	expanded95,
	coverageFactor,
	unit
}: ShownQuantity): string {
	const freedom = degreesOfFreedom === null ? '' : `, ν = ${degreesOfFreedom.toFixed(1)}`;
	const told = unit === '1' ? '' : ` ${unit}`;
	const expanded =
		expanded95 === null || coverageFactor === null
			? ''
			: `  U95 = ${expanded95.toPrecision(2)}${told} (k = ${coverageFactor.toFixed(2)}${freedom})`;
	return `${name} = ${display.text}${expanded}  ${label}`;
}

function calculation({
	title,
	symbolic,
	substituted,
	result: final,
	partials,
	budget
}: SampleCalculation): string {
	const lines = [title, symbolic, substituted, final].map((line, i) => (i === 0 ? line : `  ${line}`));
	const slopes = partials.map(
		({ tex, value, unit }) => `  ${tex} = ${value.toPrecision(6)}${unit === '1' ? '' : ` ${unit}`}`
	);
	return [...lines, ...slopes, ...budget.map(share)].join('\n');
}

function share({ label, contribution, share: part }: BudgetLine): string {
	return `    ${(100 * part).toFixed(1).padStart(5)} %  ${contribution.toPrecision(2)}  ${label}`;
}

import { checkNames } from './check-names';
import { checkUnits } from './check-units';
import { Compiler, type Fail, type FieldPath } from './compile';
import { orderSteps } from './order';
import { ancestorsOf } from './relations';
import { WorksheetSchemaProblem } from './schema-problem';
import { worksheetSource } from './source-schema';
import { withMistake } from './variant';
import type { Rubric, Worksheet } from './types';

/** Finds the line on which a field stands; null when the source is not text. */
export type LineFinder = (path: FieldPath) => number | null;

/**
 * Checks a worksheet's source (parsed YAML or JSON), parses its formulas, holds their units against those declared,
 * and puts everything computed into order.
 * @throws WorksheetSchemaProblem with file, line (where `lineOf` knows it) and field
 */
export function readWorksheet(source: unknown, file: string, lineOf: LineFinder = () => null): Worksheet {
	const fail: Fail = (path, reason) => {
		throw new WorksheetSchemaProblem(file, lineOf(path), sayPath(path), reason);
	};
	const parsed = worksheetSource.safeParse(source);
	if (!parsed.success) {
		const [issue] = parsed.error.issues;
		const path = (issue?.path ?? []).map((part) => (typeof part === 'symbol' ? String(part) : part));
		return fail(path, issue?.message ?? 'not a worksheet');
	}
	const { data } = parsed;
	const ancestors = ancestorsOf(data.tables);
	if ('cycle' in ancestors) {
		return fail(['tables'], `Their rows belong to each other in a circle: ${ancestors.cycle.join(', ')}.`);
	}
	checkNames(data, ancestors, fail);
	const compiler = new Compiler(data, ancestors, fail);
	const withoutOrder: Omit<Worksheet, 'order' | 'mistakes'> = {
		...data,
		parameters: data.parameters.map((parameter, i) => {
			if (parameter.kind === 'number' && parameter.unit === undefined)
				fail(['parameters', i, 'unit'], 'A number states its unit, "1" for none.');
			return { ...parameter, unit: parameter.kind === 'number' ? (parameter.unit ?? '1') : '' };
		}),
		tables: compiler.tables(),
		fits: compiler.fits(),
		results: compiler.results(),
		comparisons: compiler.comparisons(),
		requirements: compiler.requirements(),
		rubrics: {
			prelab: data.rubrics.prelab && withLevels(data.rubrics.prelab),
			notebook: data.rubrics.notebook && withLevels(data.rubrics.notebook),
			report: withLevels(data.rubrics.report)
		}
	};
	const ordered = orderSteps(withoutOrder);
	if ('cycle' in ordered) {
		return fail(['results'], `These need each other in a circle: ${ordered.cycle.join(', ')}.`);
	}
	const worksheet: Worksheet = { ...withoutOrder, mistakes: [], order: ordered.order };
	checkUnits(worksheet, fail);
	const mistakes = compiler.mistakes().map((mistake, i) => {
		const variant = withMistake(worksheet, { ...mistake, order: [] });
		const order = orderSteps(variant);
		if ('cycle' in order) return fail(['mistakes', i], `It leads into a circle: ${order.cycle.join(', ')}.`);
		return { ...mistake, order: order.order };
	});
	return { ...worksheet, mistakes };
}

function withLevels(rubric: {
	title: string;
	criteria: (Omit<Rubric['criteria'][number], 'levels'> & { levels: { title: string; text: string }[] })[];
}): Rubric {
	return {
		...rubric,
		criteria: rubric.criteria.map((criterion) => ({
			...criterion,
			levels: criterion.levels.map((level, i) => ({ level: i, ...level }))
		}))
	};
}

function sayPath(path: FieldPath): string {
	return path
		.map((part) => (typeof part === 'number' ? `[${part + 1}]` : part))
		.join('.')
		.replace(/\.\[/g, '[');
}

import { z } from 'zod';
import { parseUnit, QuantityProblem } from '$lib/quantities';

/** The form of a worksheet as its author writes it (YAML), before formulas are parsed. */

const name = z
	.string()
	.regex(/^[A-Za-z][A-Za-z0-9_]*$/, 'A name is a letter followed by letters, digits and underscores.')
	.max(40);
const key = z.string().regex(/^[a-z][a-z0-9-]*$/, 'A key is small letters, digits and hyphens.');
const words = z.string().trim().min(1);
const unit = z.coerce.string().superRefine((text, context) => {
	try {
		parseUnit(text);
	} catch (cause) {
		if (!(cause instanceof QuantityProblem)) throw cause;
		context.addIssue({ code: 'custom', message: cause.message });
	}
});
const positive = z.number().positive();
const range = z.strictObject({ low: z.number(), high: z.number() });
const severity = z.enum(['error', 'warning', 'note']);

const component = z
	.strictObject({
		name,
		label: words,
		distribution: z.enum(['normal', 'rectangular', 'triangular']),
		scope: z.enum(['reading', 'run', 'instrument', 'session', 'course']),
		acts: z.enum(['offset', 'gain']).default('offset'),
		size: positive,
		unit,
		degreesOfFreedom: positive.nullable().default(null),
		source: words
	})
	.strict();

const resolution = z
	.string({ error: 'The digital step as text in quotes, so that its digits are kept.' })
	.regex(/^\d+(\.\d+)?$/)
	.nullable()
	.default(null);

const column = z.strictObject({
	name,
	label: words,
	symbol: words,
	kind: z.enum(['number', 'text', 'choice']).default('number'),
	unit: unit.optional(),
	resolution,
	uncertainty: z.array(component).default([]),
	required: z.boolean().default(true),
	plausible: range.nullable().default(null),
	choices: z.array(words).default([]),
	formula: words.nullable().default(null),
	help: z.string().default('')
});

const parameter = z.strictObject({
	name,
	label: words,
	symbol: words,
	unit,
	resolution,
	uncertainty: z.array(component).default([]),
	required: z.boolean().default(true),
	plausible: range.nullable().default(null),
	help: z.string().default('')
});

const fitParameter = z.strictObject({ name, label: words, symbol: words, unit });

const fit = z.strictObject({
	name,
	label: words,
	model: z.literal('line'),
	table: name,
	x: name,
	y: name,
	weights: z.enum(['equal', 'stated']),
	policy: z.enum(['scatter', 'stated']),
	slope: fitParameter,
	intercept: fitParameter
});

const interpolation = z.strictObject({
	at: name,
	unit,
	points: z.array(z.strictObject({ at: z.number(), value: z.number() })).min(2)
});

const comparison = z.strictObject({
	name,
	quantity: name,
	reference: z
		.strictObject({
			label: words,
			unit,
			value: z.number().nullable().default(null),
			interpolate: interpolation.nullable().default(null),
			standardUncertainty: positive.nullable().default(null),
			conditions: words,
			source: words
		})
		.refine(
			(reference) => (reference.value === null) !== (reference.interpolate === null),
			'Either one value or points to interpolate.'
		),
	limit: positive
});

const requirement = z.discriminatedUnion('kind', [
	z.strictObject({ kind: z.literal('parameter'), code: key, parameter: name, severity, message: words }),
	z.strictObject({
		kind: z.literal('rows'),
		code: key,
		table: name,
		minimum: z.int().positive(),
		severity,
		message: words
	}),
	z.strictObject({
		kind: z.literal('span'),
		code: key,
		table: name,
		column: name,
		minimum: positive,
		unit,
		severity,
		message: words
	})
]);

const rubric = z.strictObject({
	title: words,
	criteria: z
		.array(
			z.strictObject({
				key,
				title: words,
				asks: words,
				weight: positive,
				levels: z.array(z.strictObject({ title: words, text: words })).min(2)
			})
		)
		.min(1)
});

export const worksheetSource = z.strictObject({
	slug: key,
	title: words,
	version: z.int().positive(),
	summary: words,
	guide: words,
	hazards: z.strictObject({
		notice: words,
		protection: words,
		substances: z.array(
			z.strictObject({
				what: words,
				statements: z.array(
					z.strictObject({ code: z.string().regex(/^(EU)?H\d{3}[A-Za-z]*$/), text: words })
				),
				cautions: words
			})
		)
	}),
	constants: z
		.array(
			z.strictObject({
				name,
				label: words,
				symbol: words,
				value: z.number(),
				unit,
				standardUncertainty: positive.nullable().default(null),
				source: words
			})
		)
		.default([]),
	parameters: z.array(parameter).default([]),
	tables: z
		.array(
			z.strictObject({
				name,
				caption: words,
				minimumRows: z.int().nonnegative(),
				columns: z.array(column).min(1)
			})
		)
		.min(1),
	fits: z.array(fit).default([]),
	results: z.array(
		z.strictObject({
			name,
			label: words,
			symbol: words,
			unit,
			formula: words,
			headline: z.boolean().default(false),
			help: z.string().default('')
		})
	),
	comparisons: z.array(comparison).default([]),
	figures: z.array(z.strictObject({ name, caption: words, fit: name })).default([]),
	requirements: z.array(requirement).default([]),
	outline: z
		.array(z.strictObject({ key, title: words, owner: z.enum(['author', 'team']), guide: words }))
		.min(1),
	rubrics: z.strictObject({ report: rubric })
});

export type WorksheetSource = z.infer<typeof worksheetSource>;

import { z } from 'zod';
import { parseUnit, QuantityProblem } from '$lib/quantities';

/** The parts of a worksheet as its author writes them (YAML), before formulas are parsed. */

export const name = z
	.string()
	.regex(/^[A-Za-z][A-Za-z0-9_]*$/, 'A name is a letter followed by letters, digits and underscores.')
	.max(40);
export const key = z.string().regex(/^[a-z][a-z0-9-]*$/, 'A key is small letters, digits and hyphens.');
export const words = z.string().trim().min(1);
export const unit = z.coerce.string().superRefine((text, context) => {
	try {
		parseUnit(text);
	} catch (cause) {
		if (!(cause instanceof QuantityProblem)) throw cause;
		context.addIssue({ code: 'custom', message: cause.message });
	}
});
export const positive = z.number().positive();
const range = z.strictObject({ low: z.number(), high: z.number() });

const component = z.strictObject({
	name,
	label: words,
	distribution: z.enum(['normal', 'rectangular', 'triangular']),
	scope: z.enum(['reading', 'run', 'instrument', 'session', 'course']),
	acts: z.enum(['offset', 'gain']).default('offset'),
	size: positive,
	unit,
	degreesOfFreedom: positive.nullable().default(null),
	source: words
});

const resolution = z
	.string({ error: 'The digital step as text in quotes, so that its digits are kept.' })
	.regex(/^\d+(\.\d+)?$/)
	.nullable()
	.default(null);

const formula = words.max(2_000);
export const policy = z.enum(['scatter', 'stated']);

export const constant = z.strictObject({
	name,
	label: words,
	symbol: words,
	value: z.number(),
	unit,
	standardUncertainty: positive.nullable().default(null),
	source: words
});

export const parameter = z.strictObject({
	name,
	label: words,
	symbol: words,
	kind: z.enum(['number', 'choice']).default('number'),
	unit: unit.optional(),
	choices: z.array(words).default([]),
	resolution,
	uncertainty: z.array(component).default([]),
	required: z.boolean().default(true),
	plausible: range.nullable().default(null),
	help: z.string().default('')
});

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
	formula: formula.nullable().default(null),
	when: formula.nullable().default(null),
	policy: policy.nullable().default(null),
	of: name.nullable().default(null),
	help: z.string().default('')
});

export const table = z.strictObject({
	name,
	caption: words,
	minimumRows: z.int().nonnegative().default(0),
	key: name.nullable().default(null),
	fixed: z
		.array(z.record(z.string(), z.string({ error: 'A cell as text in quotes, as if typed.' })))
		.nullable()
		.default(null),
	columns: z.array(column).min(1)
});

const naming = { name, label: words, symbol: words, unit };
const fitCommon = {
	name,
	label: words,
	table: name,
	per: name.nullable().default(null),
	where: formula.nullable().default(null),
	y: name,
	weights: z.string().default('equal'),
	policy
};
const line = {
	x: name,
	slope: z.strictObject(naming),
	intercept: z.strictObject(naming)
};

export const fit = z.discriminatedUnion('model', [
	z.strictObject({ model: z.literal('line'), ...fitCommon, ...line }),
	z.strictObject({ model: z.literal('both-axes'), ...fitCommon, ...line }),
	z.strictObject({ model: z.literal('origin'), ...fitCommon, x: name, slope: z.strictObject(naming) }),
	z.strictObject({
		model: z.literal('polynomial'),
		...fitCommon,
		x: name,
		degree: z.int().min(1).max(10),
		parameters: z.array(z.strictObject(naming))
	}),
	z.strictObject({
		model: z.literal('linear'),
		...fitCommon,
		x: name.nullable().default(null),
		terms: z.array(z.strictObject({ ...naming, times: z.coerce.string() })).min(1)
	}),
	z.strictObject({
		model: z.literal('curve'),
		...fitCommon,
		x: name,
		formula,
		parameters: z.array(z.strictObject({ ...naming, start: z.coerce.string() })).min(1)
	})
]);

export const result = z.strictObject({
	...naming,
	per: name.nullable().default(null),
	formula,
	when: formula.nullable().default(null),
	policy: policy.nullable().default(null),
	headline: z.boolean().default(false),
	help: z.string().default('')
});

const reference = z
	.strictObject({
		label: words,
		unit,
		value: z.number().nullable().default(null),
		interpolate: z
			.strictObject({
				at: name,
				unit,
				points: z.array(z.strictObject({ at: z.number(), value: z.number() })).min(2)
			})
			.nullable()
			.default(null),
		formula: formula.nullable().default(null),
		standardUncertainty: positive.nullable().default(null),
		conditions: words,
		source: words
	})
	.refine(
		({ value, interpolate, formula: computed }) =>
			[value, interpolate, computed].filter((way) => way !== null).length === 1,
		'One of value, interpolate and formula.'
	);

export const comparison = z
	.strictObject({
		name,
		quantity: name,
		reference: reference.nullable().default(null),
		references: z.record(z.string(), reference).default({}),
		limit: positive
	})
	.refine(
		(one) => (one.reference === null) !== (Object.keys(one.references).length === 0),
		'Either one reference, or references by key.'
	);

export const figure = z
	.strictObject({
		name,
		caption: words,
		fit: name.nullable().default(null),
		table: name.nullable().default(null),
		x: name.nullable().default(null),
		y: name.nullable().default(null),
		by: name.nullable().default(null)
	})
	.refine(
		(one) => (one.fit !== null) !== (one.table !== null && one.x !== null && one.y !== null),
		'Either a fit, or table, x and y.'
	);

const demand = { code: key, severity: z.enum(['error', 'warning', 'note']), message: words };
export const requirement = z.discriminatedUnion('kind', [
	z.strictObject({ kind: z.literal('parameter'), ...demand, parameter: name }),
	z.strictObject({ kind: z.literal('rows'), ...demand, table: name, minimum: z.int().positive() }),
	z.strictObject({
		kind: z.literal('span'),
		...demand,
		table: name,
		column: name,
		minimum: positive,
		unit
	}),
	z.strictObject({
		kind: z.literal('check'),
		...demand,
		table: name.nullable().default(null),
		condition: formula,
		missing: z.enum(['unmet', 'waits']).default('waits')
	})
]);

export const mistake = z.strictObject({
	code: key,
	title: words,
	message: words,
	instead: z.record(
		z.string(),
		z.union([
			z.strictObject({
				weights: z.string().optional(),
				policy: policy.optional(),
				x: name.optional(),
				y: name.optional()
			}),
			z.coerce.string()
		])
	)
});

export const rubric = z.strictObject({
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

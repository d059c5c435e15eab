import { z } from 'zod';
import {
	comparison,
	constant,
	figure,
	fit,
	key,
	mistake,
	parameter,
	requirement,
	result,
	rubric,
	table,
	words
} from './source-parts';

/** The form of a worksheet as its author writes it (YAML), before formulas are parsed. */
export const worksheetSource = z.strictObject({
	slug: key,
	title: words,
	version: z.int().positive(),
	summary: words,
	guide: words,
	hazards: z.strictObject({
		notice: words,
		protection: words,
		whenItGoesWrong: z.string().default(''),
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
	constants: z.array(constant).default([]),
	parameters: z.array(parameter).default([]),
	tables: z.array(table).min(1),
	fits: z.array(fit).default([]),
	results: z.array(result),
	comparisons: z.array(comparison).default([]),
	figures: z.array(figure).default([]),
	requirements: z.array(requirement).default([]),
	mistakes: z.array(mistake).default([]),
	outline: z
		.array(z.strictObject({ key, title: words, owner: z.enum(['author', 'team']), guide: words }))
		.min(1),
	rubrics: z.strictObject({
		prelab: rubric.nullable().default(null),
		notebook: rubric.nullable().default(null),
		report: rubric
	})
});

export type WorksheetSource = z.infer<typeof worksheetSource>;
export type FitSource = WorksheetSource['fits'][number];

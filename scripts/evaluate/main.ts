import { existsSync, readFileSync } from 'node:fs';
import { basename, join } from 'node:path';
import { parseArgs } from 'node:util';
import {
	evaluate,
	readTable,
	type ColumnDefinition,
	type Problem,
	type Readings,
	type Worksheet
} from '$lib/worksheets';
import { readTemplate, WorksheetSchemaProblem } from '$lib/worksheets/authoring';
import { describe } from './describe';
import { report } from './report';

/** Arguments that nothing can be made of. */
class Unusable extends Error {}

const usage = `Usage: npm run -s evaluate -- --experiment templates/<slug>
         [--readings <table>=<file.csv>]... [--parameters <file.json>] [--json]

Works readings up: results with their uncertainty, comparisons with the literature, fits, problems; without --json with
sample calculations, for reading. A column "status" (used, aborted, excluded) with "reason" marks rows.
Exit: 0; 1 with a problem of severity error; 2 when the arguments cannot be used.
`;

type Write = (text: string) => void;

/** @returns the exit code */
export function main(args: string[], out: Write, say: Write): 0 | 1 | 2 {
	try {
		const { values } = parsed(args);
		if (values.help) {
			out(usage);
			return 0;
		}
		if (values.experiment === undefined) throw new Unusable('--experiment is missing.');
		const worksheet = experiment(values.experiment);
		const { readings, problems } = gather(worksheet, values.readings ?? [], values.parameters);
		const evaluation = evaluate(worksheet, readings);
		const all = [...problems, ...evaluation.problems];
		const described = describe(worksheet, { ...evaluation, problems: all });
		out(values.json ? `${JSON.stringify(described)}\n` : report(worksheet, evaluation, described));
		return all.some(({ severity }) => severity === 'error') ? 1 : 0;
	} catch (cause) {
		if (!(cause instanceof Unusable || cause instanceof WorksheetSchemaProblem)) throw cause;
		say(`${cause.message}\n${cause instanceof Unusable ? `\n${usage}` : ''}`);
		return 2;
	}
}

function parsed(args: string[]) {
	try {
		return parseArgs({
			args,
			options: {
				experiment: { type: 'string' },
				readings: { type: 'string', multiple: true },
				parameters: { type: 'string' },
				json: { type: 'boolean' },
				help: { type: 'boolean' }
			}
		});
	} catch (cause) {
		throw new Unusable(cause instanceof Error ? cause.message : String(cause));
	}
}

function text(file: string): string {
	try {
		return readFileSync(file, 'utf8');
	} catch (cause) {
		throw new Unusable(`${file} cannot be read: ${cause instanceof Error ? cause.message : String(cause)}`);
	}
}

function experiment(folder: string): Worksheet {
	if (!existsSync(join(folder, 'template.yaml'))) {
		throw new Unusable(`--experiment ${folder}: there is no template.yaml in that folder.`);
	}
	const files = ['template.yaml', 'guide.md'].filter((name) => existsSync(join(folder, name)));
	return readTemplate(
		Object.fromEntries(files.map((name) => [name, text(join(folder, name))])),
		`templates/${basename(folder)}`
	);
}

function gather(
	worksheet: Worksheet,
	tables: readonly string[],
	parameters: string | undefined
): { readings: Readings; problems: Problem[] } {
	const readings: Readings = {
		parameters: parameters === undefined ? {} : typedTexts(parameters),
		tables: {}
	};
	const problems: Problem[] = [];
	for (const argument of tables) {
		const [name = '', file] = split(argument);
		const table = worksheet.tables.find((candidate) => candidate.name === name && candidate.fixed === null);
		if (!table) {
			const known = worksheet.tables.filter(({ fixed }) => fixed === null).map((each) => each.name);
			throw new Unusable(
				`--readings ${argument}: there is no table "${name}" to read. There is ${known.join(', ')}.`
			);
		}
		const read = readTable(text(file), [...table.columns, plain('status'), plain('reason')]);
		problems.push(...read.problems.map((problem) => ({ ...problem, table: name })));
		readings.tables[name] = read.rows.map(({ cells }, i) => {
			const { status = '', reason = '', ...rest } = cells;
			return {
				id: String(i + 1),
				cells: rest,
				status: statusOf(status, i + 1),
				...(reason === '' ? {} : { reason })
			};
		});

		function statusOf(typed: string, row: number): 'used' | 'aborted' | 'excluded' {
			if (typed === '' || typed === 'used') return 'used';
			if (typed === 'aborted' || typed === 'excluded') return typed;
			const message = `Row ${row}, status: "${typed}" is none of used, aborted, excluded. The row is left out.`;
			problems.push({
				severity: 'error',
				code: 'not-a-status',
				message,
				table: name,
				row: String(row),
				column: 'status'
			});
			return 'excluded';
		}
	}
	return { readings, problems };
}

function split(argument: string): [string, string] {
	const at = argument.indexOf('=');
	if (at < 1) throw new Unusable(`--readings ${argument}: write it as <table>=<file.csv>.`);
	return [argument.slice(0, at), argument.slice(at + 1)];
}

/** Numbers become the text that JSON shows; a text keeps its digits. */
function typedTexts(file: string): Record<string, string> {
	let data: unknown;
	try {
		data = JSON.parse(text(file));
	} catch (cause) {
		if (cause instanceof Unusable) throw cause;
		throw new Unusable(
			`--parameters ${file} is not JSON: ${cause instanceof Error ? cause.message : String(cause)}`
		);
	}
	if (typeof data !== 'object' || data === null || Array.isArray(data)) {
		throw new Unusable(`--parameters ${file}: an object with one text for each parameter is wanted.`);
	}
	return Object.fromEntries(
		Object.entries(data).map(([name, value]) => {
			if (typeof value !== 'string' && typeof value !== 'number') {
				throw new Unusable(`--parameters ${file}: "${name}" is neither a text nor a number.`);
			}
			return [name, String(value)];
		})
	);
}

function plain(name: string): ColumnDefinition {
	return {
		name,
		label: name,
		symbol: name,
		kind: 'text',
		unit: '',
		resolution: null,
		uncertainty: [],
		required: false,
		plausible: null,
		choices: [],
		formula: null,
		formulaText: null,
		when: null,
		policy: null,
		of: null,
		help: ''
	};
}

import { LineCounter, isNode, parseDocument } from 'yaml';
import type { FieldPath } from './compile';
import { readWorksheet } from './schema';
import { WorksheetSchemaProblem } from './schema-problem';
import type { Worksheet } from './types';

/** Texts of a template's folder: 'template.yaml' and 'guide.md', by file name. Reading them is the caller's part. */
export type TemplateFiles = Readonly<Record<string, string>>;

/**
 * A template's folder as a worksheet. `folder` is only for messages.
 * @throws WorksheetSchemaProblem with file, line and field
 */
export function readTemplate(files: TemplateFiles, folder: string): Worksheet {
	const file = `${folder}/template.yaml`;
	const text = files['template.yaml'];
	if (text === undefined) throw new WorksheetSchemaProblem(file, null, '', 'The file is missing.');
	const lines = new LineCounter();
	const document = parseDocument(text, { lineCounter: lines, prettyErrors: false });
	const [broken] = document.errors;
	if (broken) throw new WorksheetSchemaProblem(file, lines.linePos(broken.pos[0]).line, '', broken.message);
	const lineOf = (path: FieldPath): number | null => {
		// a missing field has no place of its own: the nearest thing around it has
		for (let length = path.length; length >= 0; length -= 1) {
			const node = document.getIn(path.slice(0, length), true);
			if (isNode(node) && node.range) return lines.linePos(node.range[0]).line;
		}
		return null;
	};
	const source: unknown = document.toJS();
	const guide = files['guide.md'];
	if (guide === undefined)
		throw new WorksheetSchemaProblem(`${folder}/guide.md`, null, '', 'The file is missing.');
	if (typeof source !== 'object' || source === null || Array.isArray(source)) {
		throw new WorksheetSchemaProblem(file, 1, '', 'The file holds no worksheet.');
	}
	return readWorksheet({ ...source, guide }, file, lineOf);
}

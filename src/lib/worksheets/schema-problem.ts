/** A worksheet's source that does not hold together: says file, line and field. */
export class WorksheetSchemaProblem extends Error {
	override readonly name = 'WorksheetSchemaProblem';
	constructor(
		readonly file: string,
		readonly line: number | null,
		readonly field: string,
		readonly reason: string
	) {
		super(`${file}${line === null ? '' : `, line ${line}`}${field === '' ? '' : `, ${field}`}: ${reason}`);
	}
}

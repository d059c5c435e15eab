/**
 * The authoring half: checks a worksheet's source and parses its formulas. It brings zod, mathjs and a YAML parser
 * along, so it is for the server and for scripts only; pages import `$lib/worksheets`.
 */
export { readOwnFormula } from './own-formula';
export { readWorksheet } from './schema';
export { readTemplate, type TemplateFiles } from './template';
export { WorksheetSchemaProblem } from './schema-problem';

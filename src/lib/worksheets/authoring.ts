/** The authoring half: brings zod and mathjs along, so it is for the server and for scripts; pages import `$lib/worksheets`. */
export { readWorksheet, WorksheetSchemaProblem } from './schema';

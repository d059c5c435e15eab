/**
 * What browsers and servers may import: types, evaluation, reading of tables. The authoring half (schema, formula
 * parser; zod and mathjs) is `$lib/worksheets/authoring`, for the server and for scripts only.
 */
export type * from './types';
export { evaluate, Evaluator, workingsFor } from './evaluate';
export { engineVersion } from './engine-version';
export { readTable } from './read-table';
export { splitDelimited } from './delimited';

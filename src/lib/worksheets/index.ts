/**
 * What browsers and servers may import: types, evaluation, reading of tables. The authoring half (schema, formula
 * parser; zod and mathjs) is `$lib/worksheets/authoring`, for the server and for scripts only.
 */
export type * from './types';
export { evaluate, Evaluator, workingsFor } from './evaluate';
export { engineVersion } from './engine-version';
export { compareOwn, computedNames, ownWorksheet, type OwnComparison, type OwnStep } from './own-workings';
export { checkStated, type StatedValue, type StatedVerdict } from './stated-value';
export { readTable } from './read-table';
export { splitDelimited } from './delimited';
export { evaluationFromStored, fromStored, type StoredEvaluation, type StoredWorksheet } from './stored';

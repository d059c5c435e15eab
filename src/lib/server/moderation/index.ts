export { readReturning } from './read-returning';
export { returnReports, type Returning } from './return-reports';
export { withdrawReturn } from './withdraw-return';
export { readSpread } from './read-spread';
export { spreadTable, type NamedCsv } from './spread-table';

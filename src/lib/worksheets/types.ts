export type * from './evaluation-types';
export type * from './worksheet-types';

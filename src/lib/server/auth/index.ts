export { allowed, authorise, may, permissions, type Action } from './permissions';
export { relations, scopes, type Relation, type Role, type Thing } from './relations';
export type { Act, Viewer } from './viewer';

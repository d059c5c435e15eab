import { operations } from './manifest';
import type { Operation } from './operation';

/** Where the API begins. */
export const apiBase = '/api/v1';

/** The route folder that answers an operation, as kit names it: /api/v1/reports/[report]. */
export const routeIdOf = (operation: Pick<Operation, 'path'>): string =>
	`${apiBase}${operation.path.replace(/\{(\w+)\}/g, '[$1]')}`;

const known = new Map(
	operations.map((operation) => [`${operation.method} ${routeIdOf(operation)}`, operation])
);

/** The contract of a request; undefined where there is none. HEAD is answered by GET. */
export const operationAt = (routeId: string | null, method: string): Operation | undefined =>
	known.get(`${method === 'HEAD' ? 'GET' : method} ${routeId ?? ''}`);

import * as accounts from './accounts';
import * as courses from './courses';
import * as marking from './marking';
import * as moderation from './moderation';
import type { Operation } from './operation';
import * as readings from './readings';
import * as reports from './reports';

/** Every operation of the API, as the OpenAPI document and the permission tests read it. */
export const operations: Operation[] = [accounts, courses, readings, reports, marking, moderation].flatMap(
	(area) =>
		Object.values(area).filter(
			(value): value is Operation =>
				typeof value === 'object' && value !== null && 'method' in value && 'path' in value
		)
);

import { courses as contracts } from '$lib/contracts';
import * as courses from '$lib/server/courses';
import { endpoint } from '$lib/server/http';

export const PATCH = endpoint(contracts.changeDates, ({ act, params, body }) =>
	courses.changeDates(act, { assignment: params.assignment, ...body })
);

import { courses as contracts } from '$lib/contracts';
import * as courses from '$lib/server/courses';
import { endpoint } from '$lib/server/http';

export const POST = endpoint(contracts.grantExtension, ({ act, params, body }) =>
	courses.grantExtension(act, { assignment: params.assignment, ...body })
);

import { courses as contracts } from '$lib/contracts';
import * as courses from '$lib/server/courses';
import { endpoint } from '$lib/server/http';

export const POST = endpoint(contracts.startWork, ({ act, params }) =>
	courses.startWork(act, { assignment: params.assignment })
);

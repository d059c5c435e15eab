import { courses as contracts } from '$lib/contracts';
import * as courses from '$lib/server/courses';
import { endpoint } from '$lib/server/http';

export const GET = endpoint(contracts.listAccounts, ({ viewer, query }) =>
	courses.accountsOfSite(viewer, query)
);

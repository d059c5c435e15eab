import * as contracts from '$lib/contracts/accounts';
import * as accounts from '$lib/server/accounts';
import * as courses from '$lib/server/courses';
import { endpoint } from '$lib/server/http';

export const POST = endpoint(contracts.invite, async ({ act, viewer, params, body }) => {
	const { id } = await courses.open(viewer, params.course);
	return accounts.invite(act, { course: id, ...body });
});

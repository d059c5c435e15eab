import * as contracts from '$lib/contracts/accounts';
import * as accounts from '$lib/server/accounts';
import * as courses from '$lib/server/courses';
import { endpoint } from '$lib/server/http';

export const GET = endpoint(contracts.listBenchWords, async ({ viewer, params }) => {
	const { id } = await courses.open(viewer, params.course);
	return { items: await accounts.listBenchWords(viewer, id) };
});
export const POST = endpoint(contracts.makeBenchWords, async ({ act, viewer, params, body }) => {
	const { id } = await courses.open(viewer, params.course);
	return accounts.makeBenchWords(act, { course: id, ...body });
});

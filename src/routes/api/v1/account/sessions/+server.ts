import * as contracts from '$lib/contracts/accounts';
import * as accounts from '$lib/server/accounts';
import { endpoint } from '$lib/server/http';

export const GET = endpoint(contracts.listSessions, async ({ viewer, event }) => ({
	items: await accounts.sessionsOf(viewer, event.locals.session)
}));
export const DELETE = endpoint(contracts.signOutEverywhere, ({ act }) => accounts.signOutEverywhere(act));

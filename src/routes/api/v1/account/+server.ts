import * as contracts from '$lib/contracts/accounts';
import * as accounts from '$lib/server/accounts';
import { endpoint } from '$lib/server/http';

export const GET = endpoint(contracts.readProfile, async ({ viewer }) => viewer);
export const PATCH = endpoint(contracts.changeProfile, ({ act, body }) => accounts.changeProfile(act, body));

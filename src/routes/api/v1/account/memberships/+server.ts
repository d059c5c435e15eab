import * as contracts from '$lib/contracts/accounts';
import * as accounts from '$lib/server/accounts';
import { endpoint } from '$lib/server/http';

export const POST = endpoint(contracts.joinByWords, ({ act, body }) => accounts.joinByWords(act, body));

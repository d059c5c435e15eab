import { health } from '$lib/contracts/accounts';
import * as accounts from '$lib/server/accounts';
import { endpoint } from '$lib/server/http';

export const GET = endpoint(health, () => accounts.health());

import { marking as contracts } from '$lib/contracts';
import { endpoint } from '$lib/server/http';
import * as marking from '$lib/server/marking';

export const POST = endpoint(contracts.useKeptRemark, ({ act, params }) =>
	marking.useKeptRemark(act, params)
);

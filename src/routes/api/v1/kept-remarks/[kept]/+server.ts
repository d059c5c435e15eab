import { marking as contracts } from '$lib/contracts';
import { endpoint } from '$lib/server/http';
import * as marking from '$lib/server/marking';

export const DELETE = endpoint(contracts.dropKeptRemark, ({ act, params }) =>
	marking.dropKeptRemark(act, params)
);

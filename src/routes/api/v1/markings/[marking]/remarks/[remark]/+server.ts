import { marking as contracts } from '$lib/contracts';
import { endpoint } from '$lib/server/http';
import * as marking from '$lib/server/marking';

export const PUT = endpoint(contracts.addRemark, ({ act, params, body }) =>
	marking.addRemark(act, { ...params, ...body })
);

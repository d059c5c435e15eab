import { marking as contracts } from '$lib/contracts';
import { endpoint } from '$lib/server/http';
import * as marking from '$lib/server/marking';

export const PATCH = endpoint(contracts.reviseRemark, ({ act, params, body }) =>
	marking.reviseRemark(act, { ...params, ...body })
);

export const DELETE = endpoint(contracts.deleteRemark, ({ act, params }) =>
	marking.deleteRemark(act, params)
);

import { marking as contracts } from '$lib/contracts';
import { endpoint } from '$lib/server/http';
import * as marking from '$lib/server/marking';

export const PUT = endpoint(contracts.replyToRemark, ({ act, params, body }) =>
	marking.replyToRemark(act, { ...params, ...body })
);

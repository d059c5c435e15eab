import { marking as contracts } from '$lib/contracts';
import { endpoint } from '$lib/server/http';
import * as marking from '$lib/server/marking';

export const GET = endpoint(contracts.readSitting, ({ viewer, params }) =>
	marking.readSitting(viewer, params.sitting)
);

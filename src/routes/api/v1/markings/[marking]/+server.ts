import { marking as contracts } from '$lib/contracts';
import { endpoint } from '$lib/server/http';
import * as marking from '$lib/server/marking';

export const GET = endpoint(contracts.readMarking, ({ viewer, params }) =>
	marking.readMarking(viewer, params.marking)
);

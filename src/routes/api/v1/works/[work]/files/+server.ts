import { readings as contracts } from '$lib/contracts';
import { endpoint } from '$lib/server/http';
import * as readings from '$lib/server/readings';

export const GET = endpoint(contracts.listWorkFiles, async ({ viewer, params }) => ({
	items: await readings.filesOf(viewer, params.work)
}));

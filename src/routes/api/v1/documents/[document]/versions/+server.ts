import { readings as contracts } from '$lib/contracts';
import { endpoint } from '$lib/server/http';
import * as readings from '$lib/server/readings';

export const GET = endpoint(contracts.listVersions, async ({ viewer, params, query }) => {
	const { items, next } = await readings.versionsOf(viewer, params.document, query);
	return { items: items.map((item) => ({ ...item, at: item.at.toISOString() })), next };
});

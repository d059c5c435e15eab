import { readings as contracts } from '$lib/contracts';
import { endpoint } from '$lib/server/http';
import * as readings from '$lib/server/readings';

export const PUT = endpoint(contracts.takeReadingsFile, ({ act, params, query, event }) =>
	readings.takeFile(act, { ...params, name: query.name, body: event.request.body })
);

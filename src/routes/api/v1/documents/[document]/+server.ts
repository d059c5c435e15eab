import { readings as contracts } from '$lib/contracts';
import { endpoint } from '$lib/server/http';
import * as readings from '$lib/server/readings';

export const GET = endpoint(contracts.readDocument, ({ viewer, params }) =>
	readings.openDocument(viewer, params.document)
);

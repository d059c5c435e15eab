import { reports as contracts } from '$lib/contracts';
import { endpoint } from '$lib/server/http';
import * as reports from '$lib/server/reports';

export const POST = endpoint(contracts.handIn, ({ act, params, body }) =>
	reports.handIn(act, { report: params.report, ...body })
);

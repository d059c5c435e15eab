import { reports as contracts } from '$lib/contracts';
import { endpoint } from '$lib/server/http';
import * as reports from '$lib/server/reports';

export const PUT = endpoint(contracts.openReport, ({ viewer, params }) =>
	reports.openReport(viewer, params.work)
);

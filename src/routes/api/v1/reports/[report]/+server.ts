import { reports as contracts } from '$lib/contracts';
import { endpoint } from '$lib/server/http';
import * as reports from '$lib/server/reports';

export const GET = endpoint(contracts.readReport, ({ viewer, params }) =>
	reports.showReport(viewer, params.report)
);

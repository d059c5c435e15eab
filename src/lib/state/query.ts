import { QueryClient } from '@tanstack/svelte-query';
import { browser } from '$app/environment';
import { ApiProblem } from './api';

/** How long an answer counts as new, ms: going back and forth between sheets asks nothing again. */
const freshFor = 30_000;

/** One for each request on the server, one for each visit in the browser: nobody gets another person's answers. */
export const createQueryClient = (): QueryClient =>
	new QueryClient({
		defaultOptions: {
			queries: {
				// On the server `load` gives initial data; asking again there would do the work twice.
				enabled: browser,
				staleTime: freshFor,
				// `request` repeats what the network dropped; a refusal stays one.
				retry: (count, problem) => !(problem instanceof ApiProblem) && count < 1
			},
			mutations: { retry: false }
		}
	});

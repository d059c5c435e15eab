import type { ServerInit } from '@sveltejs/kit';
import { building } from '$app/environment';
import { startProcess } from '$lib/server/process';

export { handle, handleError } from '$lib/server/handle';

export const init: ServerInit = async () => {
	if (!building) await startProcess();
};

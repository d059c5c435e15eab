import { json } from '@sveltejs/kit';
import { openApi } from '$lib/contracts/accounts';
import { openApiDocument } from '$lib/contracts/openapi';
import { endpoint } from '$lib/server/http';

export const GET = endpoint(openApi, async () => json(openApiDocument()));

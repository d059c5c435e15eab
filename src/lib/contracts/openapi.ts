import { z } from 'zod';
import { operations } from './manifest';
import type { Operation } from './operation';
import { apiBase } from './routes';
import { problem } from './shapes';

type Json = Record<string, unknown>;

const toSchema = (schema: z.ZodType, io: 'input' | 'output'): Json => {
	const { $schema: _, ...rest } = z.toJSONSchema(schema, { io, unrepresentable: 'any' }) as Json;
	return rest;
};

const problemAnswer = {
	description: 'Refused; `detail` says why and what to do',
	content: contentOf('application/problem+json', { $ref: '#/components/schemas/Problem' })
};

function contentOf(media: string, schema: Json): Json {
	return { [media]: { schema } };
}

/** Parameters of one place, from the properties of an object schema. */
function parametersIn(place: 'path' | 'query', schema: z.ZodType | undefined): Json[] {
	if (!schema) return [];
	const { properties = {}, required = [] } = toSchema(schema, 'input') as {
		properties?: Record<string, Json>;
		required?: string[];
	};
	return Object.entries(properties).map(([name, described]) => ({
		name,
		in: place,
		required: place === 'path' || required.includes(name),
		schema: described
	}));
}

function headersOf(operation: Operation): Json[] {
	return [
		...(operation.repeatable ? [{ $ref: '#/components/parameters/IdempotencyKey' }] : []),
		...(operation.conditional ? [{ $ref: '#/components/parameters/IfMatch' }] : [])
	];
}

function bodyOf(operation: Operation): Json {
	if (operation.upload) {
		return {
			requestBody: {
				required: true,
				description: `At most ${operation.upload.maxBytes} bytes`,
				content: contentOf('application/octet-stream', { type: 'string', contentEncoding: 'binary' })
			}
		};
	}
	if (!operation.body) return {};
	return {
		requestBody: { required: true, content: contentOf('application/json', toSchema(operation.body, 'input')) }
	};
}

function answerOf(operation: Operation): Json {
	const { response, media, status = 200 } = operation;
	if (response)
		return {
			[status]: {
				description: operation.summary,
				content: contentOf(media ?? 'application/json', toSchema(response, 'output'))
			}
		};
	if (media === 'application/json')
		return { [status]: { description: operation.summary, content: contentOf(media, {}) } };
	if (media)
		return { [status]: { description: operation.summary, content: contentOf(media, { type: 'string' }) } };
	return { 204: { description: 'Done' } };
}

function describe(operation: Operation): Json {
	return {
		operationId: operation.id,
		summary: operation.summary,
		tags: [operation.path.split('/')[1] ?? ''],
		security: operation.access === 'anyone' ? [] : [{ session: [] }],
		parameters: [
			...parametersIn('path', operation.params),
			...parametersIn('query', operation.query),
			...headersOf(operation)
		],
		...bodyOf(operation),
		responses: { ...answerOf(operation), default: problemAnswer }
	};
}

let document: Json | undefined;

/** The whole API as OpenAPI 3.1, from the contracts the routes themselves parse with. */
export function openApiDocument(): Json {
	document ??= {
		openapi: '3.1.0',
		info: {
			title: 'Meniscus',
			version: '1',
			description:
				'Writes of a signed-in browser carry Origin and JSON. Lists are keyset pages: pass `next` as `after`. Instants are UTC, what is due is local time in the course’s zone.'
		},
		servers: [{ url: apiBase }],
		paths: pathsOf(operations),
		components: {
			schemas: { Problem: toSchema(problem, 'output') },
			securitySchemes: {
				session: {
					type: 'apiKey',
					in: 'cookie',
					name: 'meniscus',
					description: 'The cookie of a signed-in browser; `__Host-meniscus` over https'
				}
			},
			parameters: {
				IdempotencyKey: {
					name: 'Idempotency-Key',
					in: 'header',
					required: false,
					description:
						'Made by the client. A repeated request with the same key gets the first answer; another request with it is refused.',
					schema: { type: 'string', maxLength: 200 }
				},
				IfMatch: {
					name: 'If-Match',
					in: 'header',
					required: false,
					description: 'The revision seen, as a number in quotes; 412 when it is no longer the current one.',
					schema: { type: 'string', pattern: '^"?\\d{1,9}"?$' }
				}
			}
		}
	};
	return document;
}

function pathsOf(all: Operation[]): Json {
	const paths: Record<string, Json> = {};
	for (const operation of all) {
		const path = (paths[operation.path] ??= {});
		path[operation.method.toLowerCase()] = describe(operation);
	}
	return paths;
}

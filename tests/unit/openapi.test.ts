import { readdirSync, readFileSync } from 'node:fs';
import { join, relative } from 'node:path';
import { expect, test } from 'vitest';
import { operations } from '../../src/lib/contracts';
import { openApiDocument } from '../../src/lib/contracts/openapi';
import { operationAt, routeIdOf } from '../../src/lib/contracts/routes';

const routes = new URL('../../src/routes', import.meta.url).pathname;
const described = JSON.parse(JSON.stringify(openApiDocument())) as {
	openapi: string;
	paths: Record<string, Record<string, Described>>;
	components: { schemas: Record<string, unknown>; parameters: Record<string, unknown> };
};
interface Described {
	operationId: string;
	summary: string;
	parameters: ({ name: string; in: string; required: boolean; schema: object } | { $ref: string })[];
	requestBody?: { content: Record<string, unknown> };
	responses: Record<string, { description: string }>;
	security: object[];
}

/** "METHOD /api/v1/…" of every route script under the API that answers to methods. */
function routesOnDisk(folder = join(routes, 'api/v1')): string[] {
	return readdirSync(folder, { withFileTypes: true }).flatMap((entry) => {
		const path = join(folder, entry.name);
		if (entry.isDirectory()) return routesOnDisk(path);
		if (entry.name !== '+server.ts') return [];
		const methods = [...readFileSync(path, 'utf8').matchAll(/^export const (GET|POST|PUT|PATCH|DELETE)\b/gm)];
		return methods.map(([, method]) => `${method} /${relative(routes, folder)}`);
	});
}

test('every route of the API is described, and every operation has its route', () => {
	const onDisk = routesOnDisk().sort();
	const inContracts = operations.map((operation) => `${operation.method} ${routeIdOf(operation)}`).sort();
	expect(onDisk.length).toBeGreaterThan(5);
	expect(inContracts).toEqual(onDisk);
	for (const operation of operations) {
		expect(operationAt(routeIdOf(operation), operation.method)?.id).toBe(operation.id);
	}
});

test('the document names each operation once, under its path and method', () => {
	expect(described.openapi).toBe('3.1.0');
	const ids = operations.map((operation) => operation.id);
	expect(new Set(ids).size).toBe(ids.length);
	for (const operation of operations) {
		const entry = described.paths[operation.path]?.[operation.method.toLowerCase()];
		expect(entry?.operationId, operation.id).toBe(operation.id);
		expect(entry?.summary.length, operation.id).toBeGreaterThan(0);
		expect(Object.keys(entry?.responses ?? {}), operation.id).toContain('default');
	}
});

test('path parameters are exactly those of the address, and required', () => {
	for (const [path, methods] of Object.entries(described.paths)) {
		const inPath = [...path.matchAll(/\{(\w+)\}/g)].map(([, name]) => name).sort();
		for (const entry of Object.values(methods)) {
			const given = entry.parameters.filter((parameter) => 'in' in parameter && parameter.in === 'path');
			expect(given.map((parameter) => 'name' in parameter && parameter.name).sort(), path).toEqual(inPath);
			expect(
				given.every((parameter) => 'required' in parameter && parameter.required),
				path
			).toBe(true);
		}
	}
});

test('every reference leads somewhere', () => {
	const text = JSON.stringify(described);
	const references = [...text.matchAll(/"\$ref":"#\/([^"]+)"/g)].map(([, path]) => path ?? '');
	expect(references).toContain('components/schemas/Problem');
	for (const reference of new Set(references.filter((path) => path.startsWith('components/')))) {
		const found = reference
			.split('/')
			.reduce<unknown>((at, key) => (at as Record<string, unknown> | undefined)?.[key], described);
		expect(found, reference).toBeDefined();
	}
});

test('repeatable and conditional operations take their headers; reads take no body', () => {
	for (const operation of operations) {
		const entry = described.paths[operation.path]?.[operation.method.toLowerCase()];
		const references = (entry?.parameters ?? []).flatMap((p) =>
			'$ref' in p ? [p.$ref.split('/').at(-1)] : []
		);
		const expected = [
			...(operation.repeatable ? ['IdempotencyKey'] : []),
			...(operation.conditional ? ['IfMatch'] : [])
		];
		expect(references, operation.id).toEqual(expected);
		if (operation.method === 'GET') expect(entry?.requestBody, operation.id).toBeUndefined();
		expect(entry?.security, operation.id).toEqual(operation.access === 'anyone' ? [] : [{ session: [] }]);
	}
});

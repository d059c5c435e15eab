import { sveltekit } from '@sveltejs/kit/vite';
import tailwindcss from '@tailwindcss/vite';
import { defineConfig } from 'vitest/config';
import { liveSocket } from './scripts/live-socket.mjs';

const alias = { $lib: new URL('./src/lib', import.meta.url).pathname };

export default defineConfig({
	plugins: [tailwindcss(), sveltekit(), liveSocket()],
	build: {
		sourcemap: false,
		// Modules of the special functions only define; none says so itself, and without this a page that wants a mean
		// would carry all distributions (half a megabyte).
		rolldownOptions: {
			treeshake: { moduleSideEffects: [{ test: /[\\/]@stdlib[\\/]/, sideEffects: false }] }
		}
	},
	test: {
		projects: [
			{
				resolve: { alias },
				// Pure functions keep nothing between files: loading each module once a worker takes a third of the time.
				test: {
					name: 'unit',
					include: ['tests/unit/**/*.test.ts'],
					environment: 'node',
					pool: 'threads',
					isolate: false
				}
			},
			{
				resolve: { alias },
				test: {
					name: 'reference',
					include: ['tests/reference/**/*.test.ts'],
					environment: 'node',
					testTimeout: 60_000
				}
			},
			{
				resolve: { alias },
				test: {
					name: 'server',
					include: ['tests/server/**/*.test.ts'],
					globalSetup: ['tests/services.ts'],
					environment: 'node',
					testTimeout: 60_000,
					hookTimeout: 120_000,
					fileParallelism: false
				}
			},
			{
				resolve: { alias },
				test: {
					name: 'browser',
					include: ['tests/browser/**/*.test.ts'],
					globalSetup: ['tests/services.ts'],
					environment: 'node',
					testTimeout: 180_000,
					hookTimeout: 240_000,
					fileParallelism: false
				}
			}
		]
	}
});

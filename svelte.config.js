import adapter from '@sveltejs/adapter-node';
import { vitePreprocess } from '@sveltejs/vite-plugin-svelte';

/** @type {import('@sveltejs/kit').Config} */
const config = {
	preprocess: vitePreprocess(),
	compilerOptions: { runes: true },
	kit: {
		adapter: adapter({ out: process.env.MENISCUS_BUILD_FOLDER ?? 'build', precompress: true }),

		csp: {
			mode: 'nonce',
			directives: {
				'default-src': ['self'],
				'script-src': ['self'],
				'style-src-elem': ['self'],
				// KaTeX and the editor's cursors position with style attributes.
				'style-src-attr': ['unsafe-inline'],
				'img-src': ['self', 'data:', 'blob:'],
				'font-src': ['self', 'data:'],
				'connect-src': ['self'],
				'object-src': ['none'],
				'base-uri': ['none'],
				'form-action': ['self'],
				'frame-ancestors': ['none']
			}
		},
		typescript: {
			config: (tsconfig) => ({
				...tsconfig,
				include: [
					...tsconfig.include,
					'../scripts/**/*.ts',
					'../drizzle.config.ts',
					'../tailwind.config.ts',
					'../tests/**/*.ts'
				]
			})
		}
	}
};

export default config;

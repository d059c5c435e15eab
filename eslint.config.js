import js from '@eslint/js';
import prettier from 'eslint-config-prettier';
import svelte from 'eslint-plugin-svelte';
import globals from 'globals';
import ts from 'typescript-eslint';
import svelteConfig from './svelte.config.js';

const inexactMath = [
	'exp',
	'expm1',
	'log',
	'log10',
	'log1p',
	'log2',
	'pow',
	'sin',
	'cos',
	'tan',
	'asin',
	'acos',
	'atan',
	'atan2',
	'sinh',
	'cosh',
	'tanh',
	'cbrt',
	'hypot'
];

export default ts.config(
	{ ignores: ['build/', '.svelte-kit/', '.meniscus/', 'node_modules/', 'drizzle/'] },
	js.configs.recommended,
	...ts.configs.strict,
	...svelte.configs.recommended,
	prettier,
	...svelte.configs.prettier,
	{
		languageOptions: { globals: { ...globals.browser, ...globals.node } },
		rules: {
			'no-undef': 'off',
			'no-restricted-syntax': [
				'error',
				{ selector: 'ExportDefaultDeclaration', message: 'Named exports only.' }
			],
			'@typescript-eslint/no-unused-vars': ['error', { argsIgnorePattern: '^_', varsIgnorePattern: '^_' }],
			'svelte/no-navigation-without-resolve': 'off'
		}
	},
	{
		files: ['**/*.svelte', '**/*.svelte.ts'],
		languageOptions: {
			parserOptions: {
				projectService: true,
				extraFileExtensions: ['.svelte'],
				parser: ts.parser,
				svelteConfig
			}
		},
		rules: { 'no-restricted-syntax': 'off' }
	},
	{ files: ['*.config.{js,ts}', 'scripts/**'], rules: { 'no-restricted-syntax': 'off' } },
	// TypeScript sees undefined names elsewhere; plain modules are nobody else's to check.
	{ files: ['**/*.mjs'], rules: { 'no-undef': 'error' } },
	{
		// Node and Chromium differ in the last bit of these; quantities/elementary wraps the ones that agree everywhere.
		files: ['src/lib/{quantities,statistics,regression,worksheets,plots,rubrics,reports,similarity}/**/*.ts'],
		ignores: ['src/lib/quantities/elementary.ts'],
		rules: {
			'no-restricted-properties': [
				'error',
				...inexactMath.map((property) => ({
					object: 'Math',
					property,
					message: 'Use quantities/elementary: the same bits in every engine.'
				}))
			],
			'no-restricted-globals': ['error', 'window', 'document', 'process', 'fetch', 'localStorage'],
			'@typescript-eslint/no-non-null-assertion': 'error'
		}
	}
);

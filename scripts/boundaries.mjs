import { cruise } from 'dependency-cruiser';
import { readdirSync, readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { dirname, join, relative } from 'node:path';
import { root } from './start/folder.mjs';

// Checks who imports whom. dependency-cruiser does it, except for what it cannot see: the type imports of Svelte files, which
// it compiles before it looks. Those go through the same path rules here.

const config = createRequire(import.meta.url)('../.dependency-cruiser.cjs');
const { forbidden, options } = config;
const alias = { $lib: join(root, 'src/lib') };

/** @param {string | string[] | undefined} patterns @param {string} path */
const matches = (patterns, path) =>
	patterns !== undefined && [patterns].flat().some((pattern) => new RegExp(pattern).test(path));

/** @param {{ path?: string | string[], pathNot?: string | string[] }} where @param {string} path */
const covers = (where, path) =>
	(where.path === undefined || matches(where.path, path)) && !matches(where.pathNot, path);

/** Rules that speak of paths alone hold for types as well. @param {{ to: object }} rule */
const isAboutPaths = (rule) => Object.keys(rule.to).every((key) => key === 'path' || key === 'pathNot');

/** @param {string} folder @returns {string[]} */
const svelteFiles = (folder) =>
	readdirSync(folder, { recursive: true, encoding: 'utf8' })
		.filter((name) => name.endsWith('.svelte'))
		.map((name) => join(folder, name));

/** @param {string} file @returns {string[]} what it imports types from, as written */
function typeImports(file) {
	const text = readFileSync(file, 'utf8');
	return [...text.matchAll(/^\s*import\s+type\s[^;]*?\sfrom\s+['"]([^'"]+)['"]/gms)].map(
		(match) => match[1] ?? ''
	);
}

/** @param {string} file @param {string} written @param {Set<string>} known @returns {string} path from the project's folder, or as written */
function resolved(file, written, known) {
	const base = written.startsWith('$lib')
		? written.replace('$lib', 'src/lib')
		: relative(root, join(dirname(file), written));
	if (!written.startsWith('$lib') && !written.startsWith('.')) return `node_modules/${written}/`;
	return (
		[base, `${base}.ts`, `${base}/index.ts`, base.replace(/\.js$/, '.ts')].find((path) => known.has(path)) ??
		base
	);
}

process.chdir(root);
const { output } = await cruise(
	['src'],
	{ ...options, ruleSet: { forbidden }, validate: true },
	{ ...options.enhancedResolveOptions, alias }
);
if (typeof output === 'string') throw new Error(output);

/** @type {{ from: string, to: string, rule: string }[]} */
const violations = output.summary.violations.map(({ from, to, rule, cycle }) => ({
	from,
	to: cycle ? cycle.map(({ name }) => name).join(' -> ') : to,
	rule: rule.name
}));
const known = new Set(output.modules.map((module) => module.source));
for (const file of svelteFiles('src')) {
	for (const written of typeImports(file)) {
		const to = resolved(file, written, known);
		for (const rule of forbidden.filter(isAboutPaths)) {
			if (covers(rule.from, file) && covers(rule.to, to))
				violations.push({ from: file, to, rule: rule.name });
		}
	}
}

const comments = new Map(
	forbidden.map((/** @type {{ name: string, comment: string }} */ rule) => [rule.name, rule.comment])
);
const rules = [...new Set(violations.map((violation) => violation.rule))].sort();
for (const rule of rules) {
	console.error(`${rule}: ${comments.get(rule)}`);
	for (const { from, to } of violations.filter((violation) => violation.rule === rule))
		console.error(`  ${from} -> ${to}`);
}
console.log(`${output.modules.length} modules, ${violations.length} imports that should not be.`);
if (output.modules.length === 0) console.error('Nothing was read.');
process.exit(violations.length > 0 || output.modules.length === 0 ? 1 : 0);

import { spawn } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { ensureChromium, installCommand } from './start/chromium.mjs';
import { root } from './start/folder.mjs';
import { checkNode, ensurePackages } from './start/packages.mjs';
import { StartProblem } from './start/problem.mjs';
import { gates, runGate } from './test/gates.mjs';
import { ensurePython, pythonCommand } from './test/python.mjs';
import { said, sum, tallyOfFile } from './test/tally.mjs';

// `npm test`: every gate and every test; `npm test -- unit server` some parts. The last line is the count.

const projects = ['unit', 'reference', 'server', 'browser'];
const parts = ['static', ...projects];
const gatesAtOnce = 2;

const wanted = process.argv.slice(2).filter((word) => !word.startsWith('-'));
const unknown = wanted.filter((word) => !parts.includes(word) && !(word in gates));
const stopping = new AbortController();
const reports = mkdtempSync(join(tmpdir(), 'meniscus-reports-'));

/** @type {import('./test/tally.mjs').Tally[]} */
const tallies = [];
/** @type {string[]} */
const failures = [];

/** @param {string} name @param {boolean} ok @param {string} text */
const line = (name, ok, text) => console.log(`${ok ? 'passed' : 'FAILED'}  ${name.padEnd(12)} ${text}`);

/** @param {string[]} names */
async function runGates(names) {
	const waiting = [...names];
	await Promise.all(
		Array.from({ length: gatesAtOnce }, async () => {
			for (let name = waiting.shift(); name && !stopping.signal.aborted; name = waiting.shift()) {
				const { ok, output, seconds } = await runGate(name, stopping.signal);
				tallies.push({ passed: ok ? 1 : 0, failed: ok ? 0 : 1, skipped: 0 });
				if (!ok) {
					failures.push(name);
					console.log(output.trim());
				}
				line(name, ok, `${seconds.toFixed(1)} s`);
			}
		})
	);
}

/** @param {string} project @param {NodeJS.ProcessEnv} env @returns {Promise<number>} exit status */
function vitest(project, env) {
	return new Promise((resolve) => {
		const child = spawn(
			process.execPath,
			[
				join(root, 'node_modules/vitest/vitest.mjs'),
				...['run', '--project', project, '--reporter=default', '--reporter=json'],
				`--outputFile.json=${join(reports, `${project}.json`)}`
			],
			// A process group of its own: hearing Ctrl-C twice, from the terminal and from us, it would leave at once.
			{ cwd: root, env, stdio: ['ignore', 'inherit', 'inherit'], detached: true }
		);
		const stop = () => child.kill('SIGINT');
		stopping.signal.addEventListener('abort', stop);
		child.once('exit', (code) => {
			stopping.signal.removeEventListener('abort', stop);
			resolve(code ?? 1);
		});
	});
}

/** @param {string} project */
async function runProject(project) {
	const began = performance.now();
	const env = { ...process.env, NODE_ENV: 'test' };
	if (project === 'browser') {
		const path = await ensureChromium((text) => console.log(`browser: ${text}`));
		if (path) env.CHROMIUM_PATH = path;
		else console.log(`The browser tests need Chromium. Run this, then test again:\n\n  ${installCommand}\n`);
	}
	if (project === 'reference' && !(await ensurePython((text) => console.log(`python: ${text}`))))
		console.log(
			`Some reference tests ask Debian's Python. To have them, run this and test again:\n\n  ${pythonCommand}\n`
		);
	const code = await vitest(project, env);
	const { notes, ...tally } = tallyOfFile(join(reports, `${project}.json`), code);
	for (const note of notes) console.log(note);
	tallies.push(tally);
	if (tally.failed > 0) failures.push(project);
	line(project, tally.failed === 0, `${said(tally)}, ${((performance.now() - began) / 1000).toFixed(1)} s`);
}

async function test() {
	checkNode();
	if (unknown.length > 0)
		throw new StartProblem(
			`There is no part ${unknown.join(', ')}. Parts: ${[...parts, ...Object.keys(gates)].join(', ')}.`
		);
	console.log(`packages: ${await ensurePackages((text) => console.log(`packages: ${text}`))}`);
	const all = wanted.length === 0;
	const names = Object.keys(gates).filter(
		(name) => all || wanted.includes('static') || wanted.includes(name)
	);
	if (names.length > 0) await runGates(names);
	for (const project of projects) {
		if ((all || wanted.includes(project)) && !stopping.signal.aborted) await runProject(project);
	}
}

let interrupted = false;
for (const signal of /** @type {const} */ (['SIGINT', 'SIGTERM', 'SIGHUP'])) {
	process.on(signal, () => {
		interrupted = true;
		stopping.abort();
	});
}

try {
	await test();
} catch (problem) {
	console.error(problem instanceof StartProblem ? problem.message : problem);
	tallies.push({ passed: 0, failed: 1, skipped: 0 });
}
rmSync(reports, { recursive: true, force: true });
const total = sum(tallies);
if (interrupted) console.log('Stopped before the end.');
else if (failures.length > 0) console.log(`Failed: ${failures.join(', ')}.`);
process.exitCode = total.failed > 0 || interrupted || total.passed === 0 ? 1 : 0;
console.log(said(total));

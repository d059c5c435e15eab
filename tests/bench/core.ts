import { readFileSync } from 'node:fs';
import { standardUncertainty, valueIn } from '$lib/quantities';
import { evaluate, Evaluator, type ReadingRow, type Readings, type Worksheet } from '$lib/worksheets';
import { readTemplate } from '$lib/worksheets/authoring';
import { Session } from '../../src/lib/worksheets/session';
import { plainFloats } from './core/plain-floats';

// `npm run bench -- core`: the calculation core on many runs of mutarotation, beside the same by hand in bare numbers. All
// figures are ratios within one run.

/** Readings of all runs, and of each: one team's five runs, then two and twenty teams' with a recording polarimeter. */
const sizes = new Map([
	[60, 12],
	[300, 60],
	[1_200, 120],
	[12_000, 120]
]);

const worksheet = JSON.parse(
	JSON.stringify(
		readTemplate(
			{
				'template.yaml': readFileSync('tests/bench/core/mutarotation.yaml', 'utf8'),
				'guide.md': 'None.'
			},
			'tests/bench/core'
		)
	)
) as Worksheet;

/** 32-bit generator by multiplication and shifts: the same readings at every run. */
function uniform(seed: number): () => number {
	let state = seed >>> 0;
	return () => {
		state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
		return (state + 0.5) / 4294967296;
	};
}

/** Runs between 0 and 0.3 mol/L, readings over three half-lives, noise of 0.02 degrees. */
function simulated(count: number): Readings {
	const perRun = sizes.get(count) ?? 120;
	const random = uniform(310);
	const noise = () => Math.sqrt(-2 * Math.log(random())) * Math.cos(2 * Math.PI * random());
	const runs: ReadingRow[] = [];
	const readings: ReadingRow[] = [];
	for (let run = 0; run * perRun < count; run += 1) {
		const volume = (15 * run) / Math.max(1, count / perRun - 1);
		const k = 0.0221 + 0.594 * ((1 * volume) / 50);
		const cells = {
			run: `R${run}`,
			V_acid: volume.toFixed(2),
			t_run: (25 + 0.2 * noise()).toFixed(2),
			alpha_end: (10.54 + 0.01 * noise()).toFixed(3)
		};
		runs.push({ id: `run-${run}`, status: 'used', cells });
		for (let i = 0; i < perRun; i += 1) {
			const t = 2 + (i * 3 * Math.LN2) / k / perRun;
			const alpha = 10.54 + 11.9 * Math.exp(-k * t) + 0.02 * noise();
			readings.push({
				id: `${run}-${i}`,
				status: 'used',
				cells: { run: `R${run}`, t: t.toFixed(3), alpha: alpha.toFixed(2) }
			});
		}
	}
	return { parameters: { c_acid: '1.000' }, tables: { runs, readings } };
}

function worked(readings: Readings): Session {
	const session = new Session(worksheet);
	session.take(readings);
	return session;
}

/** Median time of one call, ms, after the first calls that the machine learns from. */
function median(call: () => unknown, times: number): number {
	for (let i = 0; i < Math.min(5, times); i += 1) call();
	const all = Array.from({ length: times }, () => {
		const start = performance.now();
		call();
		return performance.now() - start;
	}).sort((a, b) => a - b);
	return all[Math.floor(all.length / 2)] ?? NaN;
}

function assertEqual(readings: Readings): number {
	const session = worked(readings);
	let worst = 0;
	for (const [name, [value, u]] of Object.entries(plainFloats(readings)) as [string, [number, number]][]) {
		const quantity = session.names.get(name);
		if (!quantity) throw new Error(`The core has no ${name}: ${session.problems[0]?.message ?? ''}`);
		const told = valueIn(quantity);
		const size = standardUncertainty(quantity) / quantity.unit.factor;
		worst = Math.max(worst, Math.abs(told / value - 1), Math.abs(size / u - 1));
	}
	if (!(worst < 1e-9)) throw new Error(`The core and bare numbers differ by ${worst}.`);
	return worst;
}

/** One angle changed to and fro: every other row is the very same object. */
function edits(readings: Readings): () => Readings {
	const rows = readings.tables['readings'] ?? [];
	const at = Math.floor(rows.length / 2);
	let n = 0;
	return () => {
		n += 1;
		const changed = rows.slice();
		const row = rows[at];
		if (row)
			changed[at] = {
				...row,
				cells: { ...row.cells, alpha: (Number(row.cells['alpha']) + 0.01 * (n % 2)).toFixed(2) }
			};
		return { ...readings, tables: { ...readings.tables, readings: changed } };
	};
}

/** Bytes that a session holds, for each reading. */
function bytes(readings: Readings, count: number): number {
	if (!globalThis.gc) return NaN;
	globalThis.gc();
	const before = process.memoryUsage().heapUsed;
	const kept = worked(readings);
	globalThis.gc();
	const size = (process.memoryUsage().heapUsed - before) / count;
	if (kept.names.size === 0) throw new Error('nothing was computed');
	return size;
}

const full = new Map<number, number>();
console.log('readings  core/bare  whole evaluation/bare  worst difference  bytes a reading');
for (const count of sizes.keys()) {
	const readings = simulated(count);
	const worst = assertEqual(readings);
	const times = count > 5_000 ? 9 : 41;
	const bare = median(() => plainFloats(readings), times);
	const core = median(() => worked(readings), times);
	const whole = median(() => evaluate(worksheet, readings), Math.min(times, 9));
	full.set(count, core);
	console.log(
		`${String(count).padStart(8)}  ${(core / bare).toFixed(1).padStart(9)}  ${(whole / bare).toFixed(1).padStart(21)}  ${worst.toExponential(1).padStart(16)}  ${bytes(readings, count).toFixed(0).padStart(15)}`
	);
}
console.log(
	`t(12,000)/t(1,200) of the core: ${((full.get(12_000) ?? NaN) / (full.get(1_200) ?? NaN)).toFixed(1)} (at most 12)`
);

const many = simulated(12_000);
const session = worked(many);
const next = edits(many);
const edited = median(() => session.take(next()), 41);
console.log(
	`one cell of 12,000 readings, core: ${((100 * edited) / (full.get(12_000) ?? NaN)).toFixed(2)} % of a full recompute (under 1)`
);
const evaluator = new Evaluator(worksheet);
evaluator.evaluate(many);
const wholeEdit = median(() => evaluator.evaluate(next()), 41);
const wholeFull = median(() => evaluate(worksheet, many), 5);
console.log(`the same with everything that is shown: ${((100 * wholeEdit) / wholeFull).toFixed(2)} %`);

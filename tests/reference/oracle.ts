import { spawnSync } from 'node:child_process';
import { fileURLToPath } from 'node:url';
import { plainNumber, withDeviations, type Quantity, type Source } from '$lib/quantities';

/** Debian's Python, for its packages of numpy, scipy, mpmath and uncertainties belong to that one. */
const python = '/usr/bin/python3';
const script = fileURLToPath(new URL('oracle.py', import.meta.url));

/** Why the oracle cannot be asked; null when it can. */
export function whyNoOracle(): string | null {
	const { status, error, stderr } = spawnSync(python, ['-c', 'import mpmath, numpy, scipy, uncertainties'], {
		encoding: 'utf8'
	});
	if (error) return `${python} cannot be run (${error.message}).`;
	if (status === 0) return null;
	return `${python} lacks a module (${stderr.trim().split('\n').at(-1) ?? ''}). Debian: apt-get install python3-mpmath python3-numpy python3-scipy python3-uncertainties.`;
}

/** Doubles go there and back in their shortest exact decimal form. */
export function askOracle<Answer>(questions: readonly object[]): Answer[] {
	const { status, stdout, stderr, error } = spawnSync(python, [script], {
		input: JSON.stringify(questions),
		encoding: 'utf8',
		maxBuffer: 1 << 28,
		// one thread: the tests share their cores with others
		env: { ...process.env, OPENBLAS_NUM_THREADS: '1', OMP_NUM_THREADS: '1' }
	});
	if (error) throw error;
	if (status !== 0) throw new Error(stderr);
	return JSON.parse(stdout) as Answer[];
}

/** Relative; zero for equal ones. */
export function difference(ours: number, theirs: number): number {
	return ours === theirs ? 0 : Math.abs(ours - theirs) / Math.max(Math.abs(ours), Math.abs(theirs));
}

export function source(id: string, scope: 'reading' | 'instrument' = 'reading'): Source {
	return { component: { id, label: id, scope, degreesOfFreedom: Infinity } };
}

export function uncertain(value: number, u: number, from = source('own')): Quantity {
	return withDeviations(plainNumber(value), [[from, u]]);
}

import { spawnSync } from 'node:child_process';
import { existsSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, test } from 'vitest';
import { readRecord, secrets, writeWhole } from '../../scripts/start/folder.mjs';
import { takeLock, whileLocked } from '../../scripts/start/lock.mjs';
import { table } from '../../scripts/start/output.mjs';
import { isInstalled } from '../../scripts/start/packages.mjs';
import { freePort, isFree, nextFreePort } from '../../scripts/start/ports.mjs';
import { isAlive, startedAt } from '../../scripts/start/processes.mjs';

const folder = mkdtempSync(join(tmpdir(), 'meniscus-start-'));
afterAll(() => rmSync(folder, { recursive: true, force: true }));

/** A process that has ended: its number is nobody's. */
const gone = () => spawnSync(process.execPath, ['-e', '0']).pid;

describe('the lock of one start', () => {
	test('a second one learns who has it and where', () => {
		const path = join(folder, 'told');
		const first = takeLock(path);
		if (!('lock' in first)) throw new Error('not taken');
		first.lock.tell('http://127.0.0.1:4310');
		expect(takeLock(path)).toEqual({
			holder: { pid: process.pid, started: startedAt(process.pid), address: 'http://127.0.0.1:4310' }
		});
		first.lock.release();
		expect(existsSync(path)).toBe(false);
	});

	test('a killed process’s lock is taken over, also when its number lives on in another process', () => {
		const path = join(folder, 'stale');
		writeFileSync(path, JSON.stringify({ pid: gone(), started: '1' }));
		expect(takeLock(path)).toHaveProperty('lock');
		writeFileSync(path, JSON.stringify({ pid: process.pid, started: 'long before' }));
		expect(takeLock(path)).toHaveProperty('lock');
		writeFileSync(path, '{"pid":');
		expect(takeLock(path)).toHaveProperty('lock');
	});

	test('work under one lock never overlaps', async () => {
		const path = join(folder, 'one-by-one');
		let inside = 0;
		let most = 0;
		const work = async () => {
			inside++;
			most = Math.max(most, inside);
			await new Promise((resolve) => setTimeout(resolve, 20));
			inside--;
		};
		await Promise.all([whileLocked(path, work), whileLocked(path, work), whileLocked(path, work)]);
		expect(most).toBe(1);
		await expect(whileLocked(path, () => Promise.reject(new Error('fell')))).rejects.toThrow('fell');
		expect(existsSync(path)).toBe(false);
	});
});

describe('installed packages', () => {
	const list = (packages: Record<string, unknown>) => JSON.stringify({ packages });
	const wanted = list({
		'': { name: 'meniscus' },
		'node_modules/a': { version: '1.0.0' },
		'node_modules/only-elsewhere': { version: '1.0.0', optional: true }
	});
	test.each([
		['the same', list({ 'node_modules/a': { version: '1.0.0' } }), true],
		['another version', list({ 'node_modules/a': { version: '1.0.1' } }), false],
		[
			'one too many',
			list({ 'node_modules/a': { version: '1.0.0' }, 'node_modules/b': { version: '1.0.0' } }),
			false
		],
		['one missing', list({}), false],
		['nothing installed', undefined, false],
		['cut short', '{"packages":', false]
	])('%s', (_, installed, expected) => expect(isInstalled(wanted, installed)).toBe(expected));
});

describe('ports', () => {
	test('a taken one is passed over', async () => {
		const server = createServer();
		const port = await freePort();
		await new Promise<void>((resolve) => server.listen(port, '127.0.0.1', resolve));
		try {
			expect(await isFree(port)).toBe(false);
			expect(await freePort(port)).not.toBe(port);
			expect(await nextFreePort(port, '127.0.0.1')).toBeGreaterThan(port);
		} finally {
			await new Promise((resolve) => server.close(resolve));
		}
		expect(await freePort(port)).toBe(port);
	});
});

describe('what is kept', () => {
	test('passwords are made once and are for their owner only', () => {
		const path = join(folder, 'secrets.json');
		const made = secrets(path);
		expect(secrets(path)).toEqual(made);
		expect(new Set(Object.values(made)).size).toBe(5);
		for (const word of Object.values(made)) expect(word).toMatch(/^[0-9a-f]{20,}$/);
		expect(spawnSync('stat', ['-c', '%a', path]).stdout.toString().trim()).toBe('600');
	});

	test('a record cut short reads as empty', () => {
		const path = join(folder, 'ports.json');
		writeWhole(path, '{"database":54');
		expect(readRecord(path)).toEqual({});
		expect(readRecord(join(folder, 'none'))).toEqual({});
	});
});

test('a process that ended is not alive', () => {
	expect(isAlive(process.pid)).toBe(true);
	expect(isAlive(gone())).toBe(false);
});

test('columns are as wide as they need', () => {
	expect(table(['Name', 'Role'], [['Nora Lindqvist', 'student']])).toBe(
		'  Name            Role\n  Nora Lindqvist  student'
	);
});

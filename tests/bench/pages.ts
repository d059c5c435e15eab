import { readFileSync } from 'node:fs';
import { performance } from 'node:perf_hooks';
import { chromium, type Browser } from 'playwright-core';
import { loadDemo } from '../../scripts/demo/load';
import { database, closeDatabase } from '../../src/lib/server/db';
import { openSession } from '../../src/lib/server/auth';
import { freshDatabase, startServer, type RunningServer } from '../harness';
import { setup } from '../services';

/**
 * Times of signed-in pages as ratios to the same server's health route, measured in turn within one run so that a noisy
 * machine moves both; memory after the requests; script bytes as sent, cold, until the network is idle.
 * MENISCUS_BUILD names the built application (npm run bench sees to it).
 */
const rounds = 60;
const warmUp = 10;
const memoryAfter = 300;
const aims: Record<string, number> = { 'sign-in': 90, now: 150, report: 450 };

const quantile = (values: number[], q: number) => {
	const sorted = [...values].sort((a, b) => a - b);
	const at = q * (sorted.length - 1);
	const low = sorted[Math.floor(at)] ?? NaN;
	const high = sorted[Math.ceil(at)] ?? NaN;
	return low + (high - low) * (at - Math.floor(at));
};

async function timed(origin: string, path: string, cookie: string): Promise<number> {
	const from = performance.now();
	const answer = await fetch(origin + path, { headers: { cookie }, redirect: 'manual' });
	await answer.arrayBuffer();
	if (answer.status !== 200) throw new Error(`${path} answered ${answer.status}`);
	return performance.now() - from;
}

const residentMB = (pid: number) =>
	Number(/VmRSS:\s+(\d+) kB/.exec(readFileSync(`/proc/${pid}/status`, 'utf8'))?.[1] ?? NaN) / 1024;

interface Place {
	name: string;
	path: string;
	cookie: string;
}

async function places(): Promise<Place[]> {
	const person = async (email: string) => {
		const [row] = await database().execute<{ id: string }>(
			`select id from users where email = '${email}@harrow-point.example'`
		);
		if (!row) throw new Error(`no ${email}`);
		const cookie = await openSession(database(), row.id, 'bench');
		return `${cookie.name}=${cookie.value}`;
	};
	const one = async (query: string) => {
		const [row] = await database().execute<{ v: string }>(query);
		if (!row) throw new Error(query);
		return row.v;
	};
	const student = await person('ines.okafor');
	const work = await one(
		"select w.id as v from work w join teams t on t.id = w.team_id join assignments a on a.id = w.assignment_id where t.name = 'Linden' and a.position = 1"
	);
	const alias = await one(
		"select r.alias as v from reports r join work w on w.id = r.work_id join teams t on t.id = w.team_id join assignments a on a.id = w.assignment_id where t.name = 'Maple' and a.position = 1 limit 1"
	);
	return [
		{ name: 'now', path: '/now', cookie: student },
		{ name: 'readings', path: `/c/pc310/w/${work}/bench`, cookie: student },
		{ name: 'workings', path: `/c/pc310/w/${work}/workings`, cookie: student },
		{ name: 'report', path: `/c/pc310/w/${work}/report`, cookie: student },
		{ name: 'marking sheet', path: `/c/pc310/sitting/${alias}/report`, cookie: await person('amal.haddad') }
	];
}

async function times(server: RunningServer, all: Place[]): Promise<void> {
	const health: number[] = [];
	const byPlace = new Map(all.map((place) => [place.name, [] as number[]]));
	let requests = 0;
	let memory = NaN;
	for (let round = 0; round < rounds + warmUp; round++) {
		for (const place of all) {
			const h = await timed(server.origin, '/api/v1/health', place.cookie);
			const p = await timed(server.origin, place.path, place.cookie);
			requests += 2;
			if (requests === memoryAfter) memory = residentMB(server.pid);
			if (round < warmUp) continue;
			health.push(h);
			byPlace.get(place.name)?.push(p);
		}
	}
	const base = quantile(health, 0.5);
	console.log(
		`page            median/health  p95/health   (health median ${base.toFixed(2)} ms, p95 ${(quantile(health, 0.95) / base).toFixed(1)})`
	);
	for (const [name, values] of byPlace) {
		console.log(
			`${name.padEnd(16)}${(quantile(values, 0.5) / base).toFixed(1).padStart(8)}${(quantile(values, 0.95) / base).toFixed(1).padStart(14)}`
		);
	}
	console.log(`resident memory after ${memoryAfter} requests: ${memory.toFixed(0)} MB`);
}

async function scriptBytes(browser: Browser, url: string, cookie: string | null): Promise<number> {
	const context = await browser.newContext();
	if (cookie) {
		const [name = '', value = ''] = cookie.split(/=(.*)/s);
		await context.addCookies([{ name, value, url: new URL(url).origin }]);
	}
	const page = await context.newPage();
	const session = await context.newCDPSession(page);
	await session.send('Network.enable');
	await session.send('Network.setCacheDisabled', { cacheDisabled: true });
	const scripts = new Set<string>();
	let total = 0;
	session.on('Network.responseReceived', (event) => {
		if (event.type === 'Script' || /javascript/.test(event.response.mimeType)) scripts.add(event.requestId);
	});
	session.on('Network.loadingFinished', (event) => {
		if (scripts.has(event.requestId)) total += event.encodedDataLength;
	});
	await page.goto(url, { waitUntil: 'networkidle' });
	// Editing is part of the report page: the editor comes when the first section is written in.
	if (url.endsWith('/report')) {
		await page
			.getByRole('button', { name: /^Write/ })
			.first()
			.click();
		await page.locator('.cm-content').waitFor();
		await page.waitForLoadState('networkidle');
	}
	await context.close();
	return total / 1024;
}

const stopServices = await setup();
try {
	const fresh = await freshDatabase();
	await loadDemo(() => undefined);
	const all = await places();
	const server = await startServer({ databaseUrl: fresh.url });
	try {
		await times(server, all);
		const browser = await chromium.launch({
			executablePath: process.env['CHROMIUM_PATH'] ?? '/usr/bin/chromium',
			args: ['--no-sandbox', '--disable-gpu', '--disable-background-networking', '--disable-component-update']
		});
		console.log('script, compressed, cold, to network idle');
		for (const [name, aim] of Object.entries(aims)) {
			const place = all.find((one) => one.name === name);
			const kB = await scriptBytes(
				browser,
				server.origin + (place?.path ?? '/sign-in'),
				place?.cookie ?? null
			);
			console.log(`${name.padEnd(16)}${kB.toFixed(1).padStart(8)} kB   aim under ${aim} kB`);
		}
		await browser.close();
	} finally {
		await server.stop();
		await closeDatabase();
		await fresh.drop();
	}
} finally {
	await stopServices();
}

import { existsSync } from 'node:fs';
import { join } from 'node:path';
import { kept, root } from './start/folder.mjs';
import { takeLock } from './start/lock.mjs';
import { createSteps, table } from './start/output.mjs';
import { checkNode, ensurePackages } from './start/packages.mjs';
import { StartProblem } from './start/problem.mjs';
import { run } from './start/run.mjs';

// `npm start`: from a clone to a running Meniscus. Everything it brings itself lives in .meniscus and ends with it; settings
// in the environment or .env replace the parts one by one. Nothing may be imported here that npm has not installed yet.

const development = process.argv.includes('--dev');
const step = createSteps();

/** What is to be ended, in the order it was started. @type {(() => Promise<void> | void)[]} */
const running = [];
let ending = false;
let exitCode = 0;

async function end() {
	if (ending) return;
	ending = true;
	for (const stop of running.reverse()) {
		try {
			await stop();
		} catch (problem) {
			console.error(problem);
		}
	}
	process.exit(exitCode);
}

/** @param {number} code */
function endWith(code) {
	exitCode = code;
	return end();
}

async function start() {
	checkNode();
	const taken = takeLock(kept('start.lock'));
	if ('holder' in taken) {
		const { address, pid } = taken.holder;
		console.log(
			address
				? `Meniscus already runs at ${address} (process ${pid}).`
				: `Another start is under way (process ${pid}).`
		);
		return endWith(0);
	}
	running.push(taken.lock.release);
	console.log('\nMeniscus\n');

	await step('Packages', async (say) => ({ said: await ensurePackages(say), value: undefined }));

	const { checkedSettings } = await import('./start/settings.mjs');
	const given = await step('Settings', async () => {
		const { given: value, parts } = await checkedSettings();
		return { said: parts.length === 0 ? 'everything local' : `from outside: ${parts.join(', ')}`, value };
	});

	// Loaded while the database program starts: nothing else uses this process meanwhile.
	if (!given.S3_ENDPOINT) void import('./object-store.mjs').catch(() => undefined);
	if (!given.SMTP_URL) void import('./mail-catcher.mjs').catch(() => undefined);
	const database = await openDatabase(given);
	/** @type {NodeJS.ProcessEnv} */
	const env = { ...process.env, ...given, DATABASE_URL: database.applicationUrl };

	const { demoState, hasDemo, loadDemo, demoAccounts } = await import('./start/demo.mjs');
	const withDemo = hasDemo() && (given.DEMO ? given.DEMO === 'yes' : database.local);
	await step('Tables', async (say) => {
		say('bringing up to date');
		const { bringLocalUpToDate, bringUpToDate } = await import('./start/schema.mjs');
		const update = database.local ? bringLocalUpToDate : bringUpToDate;
		let applied = await update(database.ownerUrl, database.applicationUrl);
		// Half a demo: nobody has worked here yet, since serving begins after it.
		if (withDemo && database.local && (await demoState(database.ownerUrl)) === 'interrupted') {
			await database.startOver();
			applied = await update(database.ownerUrl, database.applicationUrl);
		}
		return {
			said: applied === 0 ? 'up to date' : `${applied} ${applied === 1 ? 'migration' : 'migrations'} applied`,
			value: undefined
		};
	});

	const mailPage = await openServices(given, env);

	const build = development ? undefined : await buildStep();
	if (development && !existsSync(join(root, '.svelte-kit/tsconfig.json'))) {
		await run(process.execPath, [join(root, 'node_modules/@sveltejs/kit/svelte-kit.js'), 'sync'], {
			cwd: root
		});
	}

	if (withDemo) {
		await step('Demo', async (say) => {
			if ((await demoState(database.ownerUrl)) === 'loaded')
				return { said: 'loaded before', value: undefined };
			const address = given.ORIGIN || `http://127.0.0.1:${given.PORT}`;
			await loadDemo(database.ownerUrl, { ...env, ORIGIN: address }, say);
			return { said: 'loaded', value: undefined };
		});
	}

	const server = await step('Server', async (say) => {
		say('starting');
		const { serveBuild, serveSources } = await import('./start/server.mjs');
		const wanted = { env, host: given.HOST || '127.0.0.1', wantedPort: Number(given.PORT) };
		const value = build ? await serveBuild({ ...wanted, build }) : await serveSources(wanted);
		const moved = value.port === wanted.wantedPort ? '' : `, port ${wanted.wantedPort} was taken`;
		return { said: `listening on ${value.port}${moved}`, value };
	});
	running.push(server.stop);
	taken.lock.tell(server.address);

	console.log(`\nMeniscus is at ${server.address}`);
	if (mailPage) console.log(`What it mails is at ${mailPage}`);
	const accounts = withDemo ? await demoAccounts() : [];
	if (accounts.length > 0) {
		const rows = accounts.map(({ name, email, password, role, why }) => [name, role, email, password, why]);
		console.log(`\n${table(['Demo account', 'Role', 'Address', 'Password', 'To see'], rows)}`);
	}
	console.log('\nCtrl-C ends it.\n');

	const code = await server.ended;
	if (ending) return;
	console.error(`The server ended by itself (${code}). Start again; what was stored is kept.`);
	return endWith(1);
}

/** @param {Record<string, string | undefined>} given */
function openDatabase(given) {
	return step('Database', async (say) => {
		if (given.DATABASE_URL) {
			const value = {
				local: false,
				applicationUrl: given.DATABASE_URL,
				ownerUrl: given.DATABASE_OWNER_URL || given.DATABASE_URL,
				startOver: async () => undefined
			};
			return { said: `at ${new URL(given.DATABASE_URL).host}`, value };
		}
		const { openLocalDatabase } = await import('./start/local-database.mjs');
		const cluster = await openLocalDatabase(say);
		running.push(cluster.stop);
		const { dropDatabase, ensureDatabase } = await import('./start/roles.mjs');
		const startOver = async () => {
			await dropDatabase(cluster.superuserUrl());
			await ensureDatabase(cluster.superuserUrl());
		};
		const value = {
			local: true,
			applicationUrl: cluster.applicationUrl,
			ownerUrl: cluster.ownerUrl,
			startOver
		};
		return {
			said: `PostgreSQL ${cluster.major} on ${cluster.port}${cluster.attached ? ', was running' : ''}`,
			value
		};
	});
}

/**
 * The local object store and mail catcher, unless others are set; adds their settings to `env`.
 * @param {Record<string, string | undefined>} given
 * @param {NodeJS.ProcessEnv} env
 * @returns {Promise<string | undefined>} address of the mail page
 */
async function openServices(given, env) {
	const { openLocalMail, openLocalStore } = await import('./start/local-services.mjs');
	if (!given.S3_ENDPOINT) {
		await step('Files', async () => {
			const store = await openLocalStore();
			running.push(store.close);
			Object.assign(env, store.settings);
			return { said: `kept in .meniscus/objects, served on ${store.port}`, value: undefined };
		});
	}
	if (given.SMTP_URL) return undefined;
	return step('Mail', async () => {
		const mail = await openLocalMail();
		running.push(mail.close);
		Object.assign(env, mail.settings);
		return { said: 'caught here, delivered nowhere', value: mail.pageUrl };
	});
}

function buildStep() {
	return step('Build', async (say) => {
		const { ensureBuild } = await import('./start/build.mjs');
		const { folder, fresh } = await ensureBuild(say);
		return { said: fresh ? 'built' : 'sources unchanged', value: folder };
	});
}

for (const signal of /** @type {const} */ (['SIGINT', 'SIGTERM', 'SIGHUP']))
	process.on(signal, () => endWith(0));
// A closed terminal must not keep us from ending in order.
process.stdout.on('error', () => undefined);
process.stderr.on('error', () => undefined);

start().catch((problem) => {
	if (ending) return;
	console.error(problem instanceof StartProblem ? `\n${problem.message}` : problem);
	return endWith(1);
});

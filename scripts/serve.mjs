import { createServer } from 'node:http';
import { resolve } from 'node:path';
import { pathToFileURL } from 'node:url';

// Serves a built application: pages and API through its handler, live editing through the socket handler it leaves on
// globalThis. Settings come from the environment; `npm start` and the tests run this as a process of their own.

const liveSymbol = Symbol.for('meniscus.live');
const livePath = '/live';
const graceMilliseconds = 8_000;
const addressInUse = 98;

process.env.HOST ||= '127.0.0.1';
process.env.PORT ||= '4310';
process.env.BODY_SIZE_LIMIT ||= '12M';

const folder = resolve(process.env.MENISCUS_BUILD || 'build');
const { handler } = await import(pathToFileURL(`${folder}/handler.js`).href);

/** @type {() => { handleUpgrade(request: import('node:http').IncomingMessage, socket: import('node:stream').Duplex, head: Buffer): void, close(): Promise<void> } | undefined} */
const live = () => /** @type {any} */ (globalThis)[liveSymbol];

const server = createServer(handler);
// Proxies keep connections for about a minute: ours must outlast theirs, or a request meets a closing one.
server.keepAliveTimeout = 75_000;

server.on('upgrade', (request, socket, head) => {
	socket.on('error', () => socket.destroy());
	const path = (request.url ?? '').split('?')[0];
	const service = live();
	if (path !== livePath || !service) return void socket.destroy();
	try {
		service.handleUpgrade(request, socket, head);
	} catch (problem) {
		console.error(problem);
		socket.destroy();
	}
});

server.once('error', (problem) => {
	console.error(problem.message);
	process.exit(/** @type {NodeJS.ErrnoException} */ (problem).code === 'EADDRINUSE' ? addressInUse : 1);
});
server.listen(Number(process.env.PORT), process.env.HOST, () => {
	const address = server.address();
	const port = address && typeof address === 'object' ? address.port : process.env.PORT;
	if (process.send) process.send({ listening: port });
	else console.log(`http://${process.env.HOST}:${port}`);
});

let ending = false;
/** @param {string} reason */
async function end(reason) {
	if (ending) return;
	ending = true;
	// Whatever hangs, the process ends.
	setTimeout(() => process.exit(0), graceMilliseconds).unref();
	const closed = new Promise((done) => server.close(done));
	server.closeIdleConnections();
	await live()?.close();
	setTimeout(() => server.closeAllConnections(), graceMilliseconds / 2).unref();
	await closed;
	// The application closes its pools and workers on this; the process ends when they are.
	/** @type {any} */ (process).emit('sveltekit:shutdown', reason);
	if (process.connected) process.disconnect();
}

process.on('SIGTERM', () => end('SIGTERM'));
process.on('SIGINT', () => end('SIGINT'));
// Whoever started us is gone, even by kill -9.
if (process.send) process.on('disconnect', () => end('IDLE'));

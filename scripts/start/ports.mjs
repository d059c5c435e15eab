import { randomInt } from 'node:crypto';
import { createServer } from 'node:net';

/**
 * Whether a loopback port can be bound now.
 * @param {number} port
 * @param {string} [host]
 * @returns {Promise<boolean>}
 */
export function isFree(port, host = '127.0.0.1') {
	return new Promise((resolve) => {
		const probe = createServer();
		probe.once('error', () => resolve(false));
		probe.listen({ port, host, exclusive: true }, () => probe.close(() => resolve(true)));
	});
}

/**
 * A port nobody listens on: the preferred one when free, else one the system picks.
 * @param {number} [preferred]
 * @param {string} [host]
 * @returns {Promise<number>}
 */
export async function freePort(preferred, host = '127.0.0.1') {
	if (preferred && (await isFree(preferred, host))) return preferred;
	return new Promise((resolve, reject) => {
		const probe = createServer();
		probe.once('error', reject);
		probe.listen({ port: 0, host }, () => {
			const address = probe.address();
			probe.close(() =>
				address && typeof address === 'object' ? resolve(address.port) : reject(new Error('no port'))
			);
		});
	});
}

/**
 * The first free port from `first` upwards: people find the next number where they look.
 * @param {number} first
 * @param {string} host
 */
export async function nextFreePort(first, host) {
	for (let port = first; port < Math.min(first + 200, 65_536); port++)
		if (await isFree(port, host)) return port;
	return freePort(undefined, host);
}

/** The system takes ports of outgoing connections from 32768 (Linux) or 49152 (others) upwards. */
const lasting = { from: 15_000, below: 32_768 };

/**
 * A free port for what goes away and comes back under the same number: one that no outgoing connection can take meanwhile.
 * @returns {Promise<number>}
 */
export async function lastingPort() {
	for (let tries = 0; tries < 50; tries++) {
		const port = randomInt(lasting.from, lasting.below);
		if (await isFree(port)) return port;
	}
	return freePort();
}

/**
 * Waits until a port is free again. Errors: after `patience` milliseconds.
 * @param {number} port
 * @returns {Promise<number>} the port
 */
export async function untilFree(port, patience = 10_000) {
	for (const end = Date.now() + patience; !(await isFree(port));) {
		if (Date.now() > end) throw new Error(`port ${port} is taken`);
		await new Promise((resolve) => setTimeout(resolve, 20));
	}
	return port;
}

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

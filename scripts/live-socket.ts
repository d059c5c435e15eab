import type { IncomingMessage } from 'node:http';
import type { Duplex } from 'node:stream';
import type { Plugin } from 'vite';

const liveSymbol = Symbol.for('meniscus.live');
const livePath = '/live';

interface Live {
	handleUpgrade(request: IncomingMessage, socket: Duplex, head: Buffer): void;
}

/** Live editing in the development server: this one path is the application's, every other socket stays vite's own. */
export const liveSocket = (): Plugin => ({
	name: 'meniscus-live-socket',
	apply: 'serve',
	configureServer(server) {
		server.httpServer?.on('upgrade', (request: IncomingMessage, socket: Duplex, head: Buffer) => {
			if (request.url?.split('?')[0] !== livePath) return;
			const live = (globalThis as unknown as Record<symbol, Live | undefined>)[liveSymbol];
			// Before the first page was asked for nothing has started yet; the client tries again.
			if (live) live.handleUpgrade(request, socket, head);
			else socket.destroy();
		});
	}
});

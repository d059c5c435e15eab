const liveSymbol = Symbol.for('meniscus.live');
const livePath = '/live';

/**
 * Live editing in the development server: this one path is the application's, every other socket stays vite's own.
 * @returns {import('vite').Plugin}
 */
export const liveSocket = () => ({
	name: 'meniscus-live-socket',
	apply: 'serve',
	configureServer(server) {
		server.httpServer?.on('upgrade', (request, socket, head) => {
			if (request.url?.split('?')[0] !== livePath) return;
			const live = /** @type {any} */ (globalThis)[liveSymbol];
			// Before the first page was asked for nothing has started yet; the client tries again.
			if (live) live.handleUpgrade(request, socket, head);
			else socket.destroy();
		});
	}
});

import { createServer, type Socket } from 'node:net';

/** Publish and subscribe of Redis' protocol, as much of it as a client's handshake and a channel need. */
export async function smallRedis(): Promise<{ url: string; published: string[]; close(): Promise<void> }> {
	const subscribers = new Map<Socket, Set<string>>();
	const published: string[] = [];
	const sockets = new Set<Socket>();
	const bulk = (text: string) => `$${Buffer.byteLength(text)}\r\n${text}\r\n`;
	const answer = (socket: Socket, [command = '', ...args]: string[]): string => {
		switch (command.toLowerCase()) {
			case 'subscribe':
				return args
					.map((channel) => {
						subscribers.set(socket, (subscribers.get(socket) ?? new Set()).add(channel));
						return `*3\r\n${bulk('subscribe')}${bulk(channel)}:1\r\n`;
					})
					.join('');
			case 'publish': {
				const [channel = '', message = ''] = args;
				published.push(message);
				for (const [other, channels] of subscribers) {
					if (channels.has(channel)) other.write(`*3\r\n${bulk('message')}${bulk(channel)}${bulk(message)}`);
				}
				return ':1\r\n';
			}
			case 'info':
				return bulk('redis_version:7.0.0\r\nloading:0\r\n');
			default:
				return '+OK\r\n';
		}
	};
	const server = createServer((socket) => {
		sockets.add(socket);
		let waiting = '';
		socket.on('error', () => undefined);
		socket.on('close', () => {
			subscribers.delete(socket);
			sockets.delete(socket);
		});
		socket.on('data', (chunk) => {
			waiting += chunk.toString('utf8');
			for (let read = readCommand(waiting); read; read = readCommand(waiting)) {
				waiting = waiting.slice(read.length);
				socket.write(answer(socket, read.parts));
			}
		});
	});
	await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
	const address = server.address();
	const port = typeof address === 'object' && address ? address.port : 0;
	return {
		url: `redis://127.0.0.1:${port}`,
		published,
		close: () =>
			new Promise((resolve) => {
				server.close(() => resolve());
				for (const socket of sockets) socket.destroy();
			})
	};
}

/** One command as clients send it: an array of bulk strings (ASCII here). Null while it is incomplete. */
function readCommand(text: string): { parts: string[]; length: number } | null {
	const head = /^\*(\d+)\r\n/.exec(text);
	if (!head) return null;
	let at = head[0].length;
	const parts: string[] = [];
	for (let n = 0; n < Number(head[1]); n += 1) {
		const size = /^\$(\d+)\r\n/.exec(text.slice(at));
		if (!size) return null;
		at += size[0].length;
		const length = Number(size[1]);
		if (text.length < at + length + 2) return null;
		parts.push(text.slice(at, at + length));
		at += length + 2;
	}
	return { parts, length: at };
}

// A process of its own with nothing but the live service: `node --import tsx tests/server/live-process.ts <database> [redis]`.
import { serveLive } from './live-people';

const [databaseUrl = '', redisUrl] = process.argv.slice(2);
const server = await serveLive(databaseUrl, {
	...(redisUrl ? { redisUrl } : {}),
	sweepMs: { log: 5_000, permissions: 30_000 }
});
process.send?.(server.url);

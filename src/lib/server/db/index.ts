export {
	closeDatabase,
	connect,
	connection,
	database,
	reconnectAfter,
	type Connection,
	type Database,
	type Transaction
} from './client';
export { requestDigest, transact, type Repeatable } from './transact';
export { mustBeStorable, storableText } from './storable';
export * as schema from './schema';

export { allowed, authorise, may, permissions, type Action } from './permissions';
export { relations, scopes, type Relation, type Role, type Thing } from './relations';
export type { Act, Viewer } from './viewer';
export {
	blankCookie,
	endSession,
	endSessions,
	openSession,
	readSession,
	revokeChannel,
	ringRevoked,
	sessionHolds,
	sessionSecret,
	type OpenSession
} from './sessions';
export { hashPassword, mustBeGoodPassword, passwordMatches, shortestPassword } from './password';
export { digestOf, newSecret } from './secrets';
export { dropExpiredLimits, forgive, giveBack, spend, type Budget } from './limits';

export {
	operation,
	type BodyOf,
	type Operation,
	type ParamsOf,
	type QueryOf,
	type ResponseOf
} from './operation';
export { type ProblemDetails } from './shapes';
export * as accounts from './accounts';
export * as courses from './courses';
export * as readings from './readings';
export * as reports from './reports';
export * as marking from './marking';
export * as moderation from './moderation';
export { operations } from './manifest';

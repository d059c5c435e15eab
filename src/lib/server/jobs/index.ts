export { freeAbandoned } from './free-abandoned';
export { start, type Jobs, type Tasks } from './start';

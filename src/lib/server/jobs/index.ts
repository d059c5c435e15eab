export { start, type Jobs, type Tasks } from './start';

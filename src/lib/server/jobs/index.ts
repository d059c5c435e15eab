export { start, type Tasks } from './start';

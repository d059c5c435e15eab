export { record, type Recorded } from './record';

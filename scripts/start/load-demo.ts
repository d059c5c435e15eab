import { loadDemo } from '../demo/load';

await loadDemo();
// Pools the verbs opened would keep the process waiting.
process.exit(0);

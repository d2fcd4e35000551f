// `npm run bench`: throughputs and ratios on this machine.
import { runEntry } from './platform/run-entry.mjs';

await runEntry('bench', { database: 'none' });

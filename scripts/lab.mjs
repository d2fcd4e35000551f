// `npm run lab`: makes a laboratory and prints an invitation link.
import { runEntry } from './platform/run-entry.mjs';

await runEntry('lab', { database: 'needed' });

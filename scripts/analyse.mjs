// `npm run analyse`: a local stack to tables, without a server.
import { runEntry } from './platform/run-entry.mjs';

await runEntry('analyse', { database: 'none' });

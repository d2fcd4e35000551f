// `npm run validate`: long statistical studies, one JSON line each.
import { runEntry } from './platform/run-entry.mjs';

await runEntry('validate', { database: 'none' });

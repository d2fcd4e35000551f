// `npm run token`: prints an API token of a person.
import { runEntry } from './platform/run-entry.mjs';

await runEntry('token', { database: 'needed' });

// `npm run worker`: a worker alone, also on another machine that shares the data folder and the database.
import { runEntry } from './platform/run-entry.mjs';

await runEntry('worker', { database: 'needed' });

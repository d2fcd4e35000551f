// `npm run endure -- --minutes N`: the product under load and random faults, and whether it kept what it said.
import { ensureBundles } from './platform/bundles.mjs';
import { runEntry } from './platform/run-entry.mjs';
import { sayOn } from './platform/say.mjs';
import { ensureWebBuild } from './platform/web-build.mjs';

const say = sayOn(process.stderr);
// Built before the clock starts to run.
await ensureBundles({ names: ['migrate', 'worker', 'analyse'], say });
await ensureWebBuild(say);
await runEntry('endure', { database: 'none' });

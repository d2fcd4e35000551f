// `npm run bench`: throughputs and accuracy on this machine, beside those of a script on SciPy.
import { ensureReferencePython } from './bench/reference-python.mjs';
import { runEntry } from './platform/run-entry.mjs';
import { sayOn } from './platform/say.mjs';

// Load and memory of the whole product are compared with nothing.
const alone = process.argv.some((option) => /^--(load|product-memory)/.test(option));
if (!alone) process.env.BEADLINE_BENCH_PYTHON = (await ensureReferencePython(sayOn(process.stderr))) ?? '';
await runEntry('bench', { database: 'none' });

// `npm run bench`: throughputs and accuracy on this machine, beside those of a script on SciPy; with
// `-- --screens` how quick the screens are instead.
import { ensureReferencePython } from './bench/reference-python.mjs';
import { ensureChromium } from './platform/chromium.mjs';
import { runEntry } from './platform/run-entry.mjs';
import { sayOn } from './platform/say.mjs';

if (process.argv.includes('--screens')) {
  process.env.BEADLINE_CHROMIUM = await ensureChromium(sayOn(process.stderr));
  await runEntry('bench-screens', { database: 'none' });
} else {
  // Load, exports and memory of the whole product are compared with nothing.
  const alone = process.argv.some((option) => /^--(load|exports|product-memory)/.test(option));
  if (!alone) process.env.BEADLINE_BENCH_PYTHON = (await ensureReferencePython(sayOn(process.stderr))) ?? '';
  await runEntry('bench', { database: 'none' });
}

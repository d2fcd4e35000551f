import { mkdirSync, readFileSync, readdirSync, renameSync, existsSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { withLock } from './lock.mjs';
import { inRoot, ROOT } from './paths.mjs';
import { PlainStop } from './plain-stop.mjs';
import { hashSources } from './source-hash.mjs';

/** What the kernels are made of. */
const SOURCES = ['tracking/kernels/assembly', 'scripts/platform/kernels.mjs'];

/** Where the compiled kernels are kept, beside the bundles that load them. */
export const KERNELS_PATH = inRoot('dist', 'kernels.wasm');
const HASH_PATH = `${KERNELS_PATH}.hash`;

const OPTIONS = [
  '-O3',
  '--converge',
  '--noAssert',
  '--uncheckedBehavior',
  'always',
  '--enable',
  'simd',
].concat(['--runtime', 'stub']);

/**
 * Compiles the WebAssembly kernels from their sources, unless that was done already.
 * @param {{ step: import('./say.mjs').Say['step'] }} say
 */
export async function ensureKernels(say) {
  const hash = hashSources(ROOT, SOURCES);
  if (isCurrent(hash)) return;
  await withLock(inRoot('dist', '.kernels.lock'), async () => {
    if (isCurrent(hash)) return;
    await say.step('Compiling the kernels', compile);
    replaceFile(HASH_PATH, hash);
  });
}

/** @param {string} hash */
const isCurrent = (hash) =>
  existsSync(KERNELS_PATH) && existsSync(HASH_PATH) && readFileSync(HASH_PATH, 'utf8') === hash;

async function compile() {
  const { default: asc } = await import('assemblyscript/asc');
  const folder = inRoot('tracking', 'kernels', 'assembly');
  /** @type {Uint8Array | null} */
  let binary = null;
  const { error, stderr } = await asc.main(['index.ts', '--outFile', 'kernels.wasm', ...OPTIONS], {
    readFile: (/** @type {string} */ name) => {
      const path = join(folder, name);
      return existsSync(path) ? readFileSync(path, 'utf8') : null;
    },
    writeFile: (/** @type {string} */ name, /** @type {Uint8Array | string} */ contents) => {
      if (name.endsWith('.wasm') && typeof contents !== 'string') binary = contents;
    },
    listFiles: () => readdirSync(folder),
  });
  if (error || !binary)
    throw new PlainStop(`The kernels could not be compiled:\n${stderr.toString() || error}`);
  mkdirSync(inRoot('dist'), { recursive: true });
  replaceFile(KERNELS_PATH, binary);
}

/**
 * A process that starts at this moment reads the old file or the new one, never half of it.
 * @param {string} path
 * @param {string | Uint8Array} contents
 */
function replaceFile(path, contents) {
  const part = `${path}.${process.pid}.part`;
  writeFileSync(part, contents);
  renameSync(part, path);
}

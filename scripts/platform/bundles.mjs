import { existsSync, mkdirSync, readFileSync, readdirSync, renameSync, writeFileSync } from 'node:fs';
import { basename, join } from 'node:path';
import { ensureKernels } from './kernels.mjs';
import { withLock } from './lock.mjs';
import { inRoot, ROOT } from './paths.mjs';
import { PlainStop } from './plain-stop.mjs';
import { hashSources } from './source-hash.mjs';

/** What the bundles are made of. */
const SOURCES = [
  'scripts/entries',
  'scripts/bench',
  'scripts/endure',
  'tracking',
  'lib',
  'stacks',
  'models',
  'jobs',
  'auth',
  'migrations',
].concat([
  'package-lock.json',
  'tsconfig.json',
  'scripts/platform/bundles.mjs',
  'scripts/platform/kernels.mjs',
]);

/** Processes that compute are started by their path, so no import shows that these entries need them. */
const COMPUTING = new Set(['worker', 'analyse', 'bench', 'validate']);
const COMPUTE_CHILD = 'compute-child';
const BENCH_CHILDREN = ['bench-core', 'bench-export'];

const entriesFolder = inRoot('scripts', 'entries');

/** Where bundles are kept. */
export const bundlePath = (/** @type {string} */ name) => inRoot('dist', `${name}.mjs`);

/** Names of all entry points, from their sources. */
export const entryNames = () =>
  readdirSync(entriesFolder)
    .filter((file) => file.endsWith('.ts'))
    .map((file) => basename(file, '.ts'));

/** One value for the code that computes: same value, same results. */
export const codeVersion = () => {
  const { version } = JSON.parse(readFileSync(inRoot('package.json'), 'utf8'));
  return `${version}+${hashSources(ROOT, ['tracking', 'stacks', 'jobs']).slice(0, 12)}`;
};

/**
 * Bundles entry points whose sources have changed since they were bundled.
 * @param {{ names?: string[], say: import('./say.mjs').Say }} options names without ending; default: all
 */
export async function ensureBundles({ names = entryNames(), say }) {
  const computes = names.some((name) => COMPUTING.has(name));
  if (computes) await ensureKernels(say);
  const children = [...(computes ? [COMPUTE_CHILD] : []), ...(names.includes('bench') ? BENCH_CHILDREN : [])];
  const wanted = [...new Set([...names, ...children])];
  const hash = hashSources(ROOT, SOURCES);
  if (isCurrent(wanted, hash)) return;
  await withLock(inRoot('dist', '.bundles.lock'), async () => {
    if (isCurrent(wanted, hash)) return;
    await say.step('Bundling the command-line programs', () => bundle(wanted));
    const made = Object.fromEntries(wanted.map((name) => [name, hash]));
    replaceFile(inRoot('dist', 'bundles.json'), JSON.stringify({ ...readMade(), ...made }, null, 2));
  });
}

/** @param {string[]} names @param {string} hash */
const isCurrent = (names, hash) => {
  const made = readMade();
  return names.every((name) => made[name] === hash && existsSync(bundlePath(name)));
};

/** @returns {Record<string, string>} */
function readMade() {
  try {
    return JSON.parse(readFileSync(inRoot('dist', 'bundles.json'), 'utf8'));
  } catch {
    return {};
  }
}

/** @param {string[]} names */
async function bundle(names) {
  const esbuild = await import('esbuild');
  try {
    const result = await esbuild.build({
      absWorkingDir: ROOT,
      entryPoints: names.map((name) => join(entriesFolder, `${name}.ts`)),
      outdir: inRoot('dist'),
      outExtension: { '.js': '.mjs' },
      bundle: true,
      platform: 'node',
      format: 'esm',
      target: 'node20',
      packages: 'external',
      alias: { '@': ROOT },
      sourcemap: true,
      logLevel: 'silent',
      write: false,
    });
    mkdirSync(inRoot('dist'), { recursive: true });
    for (const { path, contents } of result.outputFiles) replaceFile(path, contents);
  } catch (error) {
    const { errors = [] } = /** @type {import('esbuild').BuildFailure} */ (error);
    const lines = errors.map(({ text, location }) => `  ${location?.file}:${location?.line}: ${text}`);
    throw new PlainStop(`The programs could not be bundled:\n${lines.join('\n') || error}`);
  } finally {
    await esbuild.stop();
  }
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

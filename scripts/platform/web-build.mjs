import { existsSync, readFileSync, readdirSync, writeFileSync } from 'node:fs';
import { withLock } from './lock.mjs';
import { inRoot, ROOT } from './paths.mjs';
import { PlainStop } from './plain-stop.mjs';
import { runCommand, tailOf } from './run-command.mjs';
import { hashSources } from './source-hash.mjs';

/** Folders that can't reach the web server: a change in them needs no new build. */
const NOT_BUILT = new Set(['node_modules', 'dist', 'tests', 'scripts', 'migrations', 'coverage']);

/** What the web server is built from: all sources but those above, so that a new folder counts by itself. */
const webSources = () =>
  readdirSync(ROOT, { withFileTypes: true })
    .filter(({ name }) => !NOT_BUILT.has(name) && !name.startsWith('.'))
    .filter((entry) => entry.isDirectory() || /\.(ts|tsx|mjs|json)$/.test(entry.name))
    .map(({ name }) => name)
    .filter(
      (name) => name !== 'next-env.d.ts' && name !== 'vitest.config.ts' && name !== 'eslint.config.mjs',
    );

const stampFile = inRoot('.next', 'beadline-sources');

/** Next's command, run by this very Node.js. */
export const nextCommand = (/** @type {string[]} */ ...args) => [
  process.execPath,
  inRoot('node_modules', 'next', 'dist', 'bin', 'next'),
  ...args,
];

/**
 * Builds the web server where its sources have changed since the last build.
 * @param {import('./say.mjs').Say} say
 */
export async function ensureWebBuild(say) {
  if (builtFrom() === hashSources(ROOT, webSources())) return;
  await withLock(inRoot('dist', '.web-build.lock'), async () => {
    const hash = hashSources(ROOT, webSources());
    if (builtFrom() === hash) return;
    await say.step('Building the web server (about a minute)', async () => {
      const result = await runCommand(nextCommand('build'), {
        cwd: ROOT,
        env: { ...process.env, NODE_ENV: 'production', NEXT_TELEMETRY_DISABLED: '1' },
      });
      if (result.code !== 0) throw new PlainStop(`The web server could not be built:\n${tailOf(result, 40)}`);
      writeFileSync(stampFile, hash);
    });
  });
}

/** Hash of the sources of the build that is there, or null. A build that was cut short has no stamp. */
function builtFrom() {
  if (!existsSync(inRoot('.next', 'BUILD_ID'))) return null;
  try {
    return readFileSync(stampFile, 'utf8');
  } catch {
    return null;
  }
}

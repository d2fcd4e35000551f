// `npm test [-- PART-OF-A-FILE-NAME ...]`: all tests, or some, on a throw-away cluster with its own ports.
import { spawn } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { codeVersion, ensureBundles } from './platform/bundles.mjs';
import { ensureChromium } from './platform/chromium.mjs';
import { countResults } from './platform/count-results.mjs';
import { ensurePackages } from './platform/ensure-packages.mjs';
import { inRoot, ROOT } from './platform/paths.mjs';
import { PlainStop } from './platform/plain-stop.mjs';
import { ensurePythonReaders } from './platform/python-readers.mjs';
import { endCommands } from './platform/run-command.mjs';
import { sayOn } from './platform/say.mjs';
import { migrate, migrationEnv } from './platform/steps-of-start.mjs';
import { onStopSignals } from './platform/stop-signals.mjs';
import { createSupervisor } from './platform/supervise.mjs';
import {
  applicationUrlOf,
  makeTemporaryFolder,
  removeFolders,
  startTestCluster,
} from './platform/test-cluster.mjs';
import { selectsAny } from './platform/test-selection.mjs';
import { ensureWebBuild } from './platform/web-build.mjs';

const say = sayOn(process.stdout);
const args = process.argv.slice(2);
const temporary = makeTemporaryFolder();
const supervisor = createSupervisor({ logs: join(temporary, 'logs'), say });
const folders = [temporary];
let endVitest = () => {};
let failuresBefore = 0;

/** Sets up what the chosen tests need. @returns {Promise<NodeJS.ProcessEnv>} */
async function setUp() {
  await ensurePackages(say, { withDev: true });
  const { templateUrl, clusterFolder } = await startTestCluster(temporary, { say, supervisor });
  folders.push(clusterFolder);
  await bundle();
  const env = {
    ...process.env,
    TEST_DATABASE_URL: templateUrl,
    TEST_FOLDER: temporary,
    BEADLINE_ROOT: ROOT,
    BEADLINE_DATA: join(temporary, 'data'),
    BEADLINE_CODE_VERSION: codeVersion(),
    NEXTAUTH_SECRET: 'a secret of the tests alone',
  };
  const database = { ownerUrl: templateUrl, applicationUrl: applicationUrlOf(templateUrl) };
  await migrate({ ...env, ...migrationEnv(database) }, say);
  if (selectsAny(args, 'tests/jobs/exports', ROOT))
    Object.assign(env, { TEST_PYTHON: await ensurePythonReaders(say) });
  const withBrowser = selectsAny(args, 'tests/e2e', ROOT);
  if (withBrowser || selectsAny(args, 'tests/api', ROOT)) await ensureWebBuild(say);
  return withBrowser ? { ...env, TEST_CHROMIUM: await ensureChromium(say) } : env;
}

/** A program that can't be bundled is a failure of its own, but the tests that don't need it still tell something. */
async function bundle() {
  try {
    await ensureBundles({ say });
  } catch (error) {
    if (!(error instanceof PlainStop)) throw error;
    say.line(error.message);
    failuresBefore += 1;
    await ensureBundles({ names: ['migrate'], say });
  }
}

/** @param {NodeJS.ProcessEnv} env @returns {Promise<number>} */
function runVitest(env) {
  const report = join(temporary, 'results.json');
  const reporters = ['--reporter=default', '--reporter=json', `--outputFile.json=${report}`];
  const vitest = spawn(
    process.execPath,
    [inRoot('node_modules', 'vitest', 'vitest.mjs'), 'run', ...reporters, ...args],
    { cwd: ROOT, env, stdio: ['ignore', 'inherit', 'inherit'] },
  );
  endVitest = () => vitest.kill('SIGTERM');
  return new Promise((resolve) => {
    vitest.on('error', () => resolve(1));
    vitest.on('exit', (code) => resolve(code ?? 1));
  });
}

async function tearDown() {
  await supervisor.stop();
  if (process.env.BEADLINE_TEST_KEEP === '1') say.line(`Kept: ${folders.join(', ')}`);
  else removeFolders(folders);
}

function readReport() {
  try {
    return JSON.parse(readFileSync(join(temporary, 'results.json'), 'utf8'));
  } catch {
    return null;
  }
}

onStopSignals({
  stop: () => {
    endCommands();
    endVitest();
  },
  force: () => supervisor.force(),
});

let exitCode = 1;
try {
  exitCode = await runVitest(await setUp());
} catch (error) {
  say.line(error instanceof PlainStop ? error.message : String(/** @type {Error} */ (error).stack));
}
const { passed, skipped, unloaded, ...counted } = countResults(readReport(), exitCode);
const failed = counted.failed + failuresBefore;
await tearDown();
for (const name of unloaded) say.line(`Not one test of this file could run, or a hook failed: ${name}`);
if (skipped > 0) say.line(`${skipped} skipped`);
say.line(`${passed} passed, ${failed} failed`);
process.exit(failed > 0 ? 1 : 0);

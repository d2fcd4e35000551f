// `npm start`: everything from a clean clone to a running product, and back to nothing at Ctrl-C.
import { join } from 'node:path';
import { codeVersion, ensureBundles } from './platform/bundles.mjs';
import { ensurePackages } from './platform/ensure-packages.mjs';
import { isPortFree } from './platform/free-port.mjs';
import { waitForHealth } from './platform/health.mjs';
import { ROOT } from './platform/paths.mjs';
import { PlainStop, runToExit } from './platform/plain-stop.mjs';
import { startPrivateCluster } from './platform/private-cluster.mjs';
import { endCommands } from './platform/run-command.mjs';
import { refuseHalfRestored } from './platform/restore-backup.mjs';
import { readRunning, removeRunning, writeRunning } from './platform/running.mjs';
import { sayOn } from './platform/say.mjs';
import { ensureDataFolder, ensureSecrets } from './platform/secrets.mjs';
import { readStartSettings } from './platform/start-settings.mjs';
import { makeDemo, migrate, migrationEnv } from './platform/steps-of-start.mjs';
import { onStopSignals } from './platform/stop-signals.mjs';
import { createSupervisor } from './platform/supervise.mjs';
import { superviseWebAndWorkers } from './platform/web-and-workers.mjs';
import { ensureWebBuild } from './platform/web-build.mjs';

const HEALTHY_WITHIN_MS = 120_000;
const NO_DEMO_HINT =
  'No demo laboratory: `npm run lab -- --name NAME --email ADDRESS` makes a laboratory and prints an invitation link.';

const NO_WORKERS_HINT =
  'No workers here: recordings and analyses wait until `npm run worker` runs, here or on another machine.';

const say = sayOn(process.stdout);

async function start() {
  const settings = readStartSettings(process.env);
  const { url, port, data } = settings;
  refuseHalfRestored(data);
  ensureDataFolder(data);
  const other = readRunning(data);
  if (other) throw new PlainStop(`Beadline already runs on ${data} (process ${other.pid}, ${other.url}).`);
  if (!(await isPortFree(port)))
    throw new PlainStop(`Port ${port} is in use by another program: set PORT to a free one.`);

  const supervisor = createSupervisor({
    logs: join(data, 'logs'),
    say,
    onChange: (children) =>
      writeRunning(data, {
        pid: process.pid,
        url,
        children: children.map(({ name, pid }) => ({ name, pid })),
      }),
  });
  let stopping = false;
  const end = async (/** @type {number} */ exitCode) => {
    if (stopping) return;
    stopping = true;
    endCommands();
    await supervisor.stop();
    removeRunning(data);
    if (exitCode === 0) say.line('Stopped.');
    process.exit(exitCode);
  };
  onStopSignals({
    stop: () => {
      say.line('Stopping: web server, workers, database ...');
      void end(0);
    },
    force: () => {
      say.line('Ending everything at once.');
      supervisor.force();
      removeRunning(data);
      setTimeout(() => process.exit(1), 500);
    },
  });

  try {
    await bringUp(settings, supervisor, () => stopping);
  } catch (error) {
    // A step that fails because we are stopping is not news.
    if (stopping) return;
    process.stderr.write(
      `${error instanceof PlainStop ? error.message : /** @type {Error} */ (error).stack}\n`,
    );
    await end(1);
  }
}

/**
 * @param {ReturnType<typeof readStartSettings>} settings
 * @param {import('./platform/supervise.mjs').Supervisor} supervisor
 * @param {() => boolean} isStopping
 */
async function bringUp(settings, supervisor, isStopping) {
  const { url, port, data, workers, withDemo } = settings;
  await ensurePackages(say);
  const database = settings.databaseUrl
    ? { ownerUrl: settings.ownerUrl ?? settings.databaseUrl, applicationUrl: settings.databaseUrl }
    : await startPrivateCluster(data, { say, supervisor });
  await ensureBundles({ names: ['migrate', 'worker', ...(withDemo ? ['demo'] : [])], say });
  const env = {
    ...process.env,
    PORT: String(port),
    BEADLINE_DATA: data,
    BEADLINE_ROOT: ROOT,
    BEADLINE_CODE_VERSION: codeVersion(),
    DATABASE_URL: database.applicationUrl,
    // The owner's password is for migrations alone.
    DATABASE_OWNER_URL: undefined,
    // Behind a proxy the address that browsers see is another one.
    NEXTAUTH_URL: process.env.NEXTAUTH_URL || url,
    NEXTAUTH_SECRET: process.env.NEXTAUTH_SECRET || ensureSecrets(data).secrets.nextauthSecret,
    NEXT_TELEMETRY_DISABLED: '1',
  };
  await migrate({ ...env, ...migrationEnv(database) }, say);
  await ensureWebBuild(say);
  const howToSignIn = withDemo ? await makeDemo(env, say) : NO_DEMO_HINT;
  if (isStopping()) return;

  const noun = workers === 1 ? 'worker' : 'workers';
  await say.step(`Starting the web server and ${workers} ${noun}`, async () => {
    const children = superviseWebAndWorkers(supervisor, { port, workers, env });
    const explain = () =>
      children.map(({ name, log }) => `--- ${log.path} (${name})\n${log.tail(10)}`).join('\n');
    const withWorkers = workers > 0;
    await waitForHealth(url, { within_ms: HEALTHY_WITHIN_MS, withWorkers, isStopping, explain });
  });
  if (isStopping()) return;
  if (workers === 0) say.line(NO_WORKERS_HINT);
  say.line(`Logs: ${join(data, 'logs')}`);
  say.line(howToSignIn);
  say.line(`Beadline is ready at ${url}`);
}

await runToExit(start);

import { bundlePath } from './bundles.mjs';
import { ROOT } from './paths.mjs';
import { tiedCommand } from './tied-command.mjs';
import { nextCommand } from './web-build.mjs';

/**
 * Adds the web server and the workers to those who are supervised.
 * @param {import('./supervise.mjs').Supervisor} supervisor
 * @param {{ port: number, workers: number, env: NodeJS.ProcessEnv }} options env: all that they need to know
 * @returns {import('./supervise.mjs').Child[]}
 */
export function superviseWebAndWorkers(supervisor, { port, workers, env }) {
  const web = supervisor.add({
    name: 'web',
    command: tiedCommand(nextCommand('start', '-H', '127.0.0.1', '-p', String(port))),
    cwd: ROOT,
    env: { ...env, NODE_ENV: 'production' },
    // Streams of progress stay open for as long as a page does, so the wait for them must be short.
    stopWithin_ms: 8_000,
    stopOrder: 1,
  });
  const others = Array.from({ length: workers }, (_, i) =>
    supervisor.add({
      name: `worker-${i + 1}`,
      command: tiedCommand([process.execPath, '--enable-source-maps', bundlePath('worker')]),
      cwd: ROOT,
      env: { ...env, NODE_ENV: 'production' },
      // Long enough to write the chunk in hand and to let go of its row.
      stopWithin_ms: 20_000,
      stopOrder: 2,
    }),
  );
  return [web, ...others];
}

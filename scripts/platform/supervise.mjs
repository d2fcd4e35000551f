import { spawn } from 'node:child_process';
import { join } from 'node:path';
import { WELL_AFTER_MS, waitBeforeStart_s } from './backoff.mjs';
import { openLog } from './log-file.mjs';
import { isAlive, waitUntil } from './processes.mjs';

/**
 * @typedef {object} ChildSpec
 * @property {string} name also the name of its log file
 * @property {string[]} command
 * @property {string} [cwd]
 * @property {NodeJS.ProcessEnv} [env]
 * @property {NodeJS.Signals} [stopSignal] asks it to end in order
 * @property {NodeJS.Signals} [killSignal] ends it at once
 * @property {number} stopWithin_ms
 * @property {number} stopOrder lower numbers stop first, equal ones together
 * @property {() => Promise<void>} [beforeStart] clears the way before it is started again
 *
 * @typedef {{ name: string, pid: number | null, log: ReturnType<typeof openLog> }} Child
 * @typedef {ReturnType<typeof createSupervisor>} Supervisor
 */

/**
 * Keeps child processes running: one that ends is started again after a wait that grows with each failure.
 * @param {{ logs: string, say: import('./say.mjs').Say, onChange?: (children: Child[]) => void }} options
 *   folder of the log files; what to call when a child has begun or ended
 */
export function createSupervisor({ logs, say, onChange = () => {} }) {
  /** @type {ReturnType<typeof superviseOne>[]} */
  const children = [];
  let stopping = false;

  const context = {
    logs,
    say,
    isStopping: () => stopping,
    onChange: () => onChange(children.map(({ child }) => child)),
  };

  return {
    /** @param {ChildSpec} spec @returns {Child} */
    add(spec) {
      const one = superviseOne(spec, context);
      children.push(one);
      one.start();
      return one.child;
    },
    /** Ends all children in order; returns when none is left. */
    async stop() {
      stopping = true;
      const orders = [...new Set(children.map(({ spec }) => spec.stopOrder))].sort((a, b) => a - b);
      for (const order of orders)
        await Promise.all(children.filter(({ spec }) => spec.stopOrder === order).map((one) => one.stop()));
    },
    /** Ends all children at once. */
    force() {
      stopping = true;
      for (const one of children) one.kill();
    },
  };
}

/**
 * @param {ChildSpec} spec
 * @param {{ logs: string, say: import('./say.mjs').Say, isStopping: () => boolean, onChange: () => void }} context
 */
function superviseOne(spec, { logs, say, isStopping, onChange }) {
  const log = openLog(join(logs, `${spec.name}.log`));
  /** @type {Child} */
  const child = { name: spec.name, pid: null, log };
  let failures = 0;
  /** @type {NodeJS.Timeout | undefined} */
  let nextStart;

  function start() {
    const [program, ...args] = spec.command;
    const begun_ms = Date.now();
    // Its own process group: Ctrl-C at the terminal reaches the supervisor alone, which keeps the order of stops.
    const running = spawn(program, args, {
      cwd: spec.cwd,
      env: spec.env ?? process.env,
      detached: true,
      stdio: ['ignore', 'pipe', 'pipe'],
    });
    child.pid = running.pid ?? null;
    running.stdout.on('data', log.write);
    running.stderr.on('data', log.write);
    running.on('error', (error) => ended(error.message, begun_ms));
    running.on('exit', (code, signal) => {
      killGroup(running.pid, 'SIGKILL');
      ended(signal ?? `exit code ${code}`, begun_ms);
    });
    onChange();
  }

  /** @param {string} how @param {number} begun_ms */
  function ended(how, begun_ms) {
    if (child.pid === null && nextStart) return;
    child.pid = null;
    onChange();
    if (isStopping()) return;
    failures = Date.now() - begun_ms >= WELL_AFTER_MS ? 1 : failures + 1;
    const wait_s = waitBeforeStart_s(failures);
    say.line(`${spec.name} ended (${how}): starting it again in ${wait_s} s. Its log: ${log.path}`);
    nextStart = setTimeout(startAgain, wait_s * 1000);
  }

  async function startAgain() {
    nextStart = undefined;
    await spec.beforeStart?.();
    if (!isStopping()) start();
  }

  const kill = () => {
    clearTimeout(nextStart);
    if (child.pid) killGroup(child.pid, spec.killSignal ?? 'SIGKILL');
  };

  async function stop() {
    clearTimeout(nextStart);
    const { pid } = child;
    if (!pid) return;
    killOne(pid, spec.stopSignal ?? 'SIGTERM');
    if (await waitUntil(() => child.pid === null, spec.stopWithin_ms)) return;
    say.line(`${spec.name} did not end within ${spec.stopWithin_ms / 1000} s: ending it at once.`);
    kill();
    await waitUntil(() => child.pid === null || !isAlive(pid), 10_000);
  }

  return { spec, child, start, stop, kill };
}

/**
 * What a killed child has started ends with it.
 * @param {number | undefined} pid leader of the group
 * @param {NodeJS.Signals} signal
 */
function killGroup(pid, signal) {
  if (pid) killOne(-pid, signal);
}

/** @param {number} pid @param {NodeJS.Signals} signal */
function killOne(pid, signal) {
  try {
    process.kill(pid, signal);
  } catch {
    // It has ended by itself.
  }
}

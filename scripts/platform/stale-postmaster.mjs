import { readFileSync, realpathSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { commandLineOf, isAlive, waitUntil, workingFolderOf } from './processes.mjs';

/**
 * The server that runs on a cluster now, or null.
 *
 * After a crash of the machine the number in postmaster.pid may belong to any program, and PostgreSQL would then
 * refuse to start. A server works in its data folder, which tells it from a stranger and from another cluster.
 *
 * @param {string} data the cluster's data folder
 * @returns {number | null}
 */
export function postmasterOf(data) {
  const pid = writtenPid(data);
  if (!pid || !isAlive(pid)) return null;
  const folder = workingFolderOf(pid);
  if (folder !== null) return folder === realpathSync(data) ? pid : null;
  // The folder of another user's process is hidden; its command line is not.
  return commandLineOf(pid).some((part) => part.includes('postgres')) ? pid : null;
}

/**
 * Makes a cluster free to be started: ends a server that an earlier, killed start has left, and removes a mark
 * whose number now belongs to a stranger. The mark of a dead server stays: PostgreSQL learns from it whether
 * parts of that server still hold its memory.
 * @param {string} data
 * @param {import('./say.mjs').Say} say
 */
export async function clearPostmaster(data, say) {
  const pid = postmasterOf(data);
  if (!pid) {
    const written = writtenPid(data);
    if (written && isAlive(written)) rmSync(join(data, 'postmaster.pid'), { force: true });
    return;
  }
  say.line(`Stopping a database server that an earlier start has left (process ${pid}) ...`);
  for (const signal of /** @type {const} */ (['SIGINT', 'SIGQUIT'])) {
    try {
      process.kill(pid, signal);
    } catch {
      // It has gone in the meantime.
    }
    if (await waitUntil(() => postmasterOf(data) === null, 20_000)) return;
  }
}

/** @param {string} data */
function writtenPid(data) {
  try {
    return Number(readFileSync(join(data, 'postmaster.pid'), 'utf8').split('\n')[0]) || null;
  } catch {
    return null;
  }
}

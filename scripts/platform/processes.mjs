import { readFileSync, readlinkSync } from 'node:fs';

/**
 * Whether a process with this number exists, also when it belongs to another user.
 * @param {number} pid
 */
export function isAlive(pid) {
  try {
    process.kill(pid, 0);
    return true;
  } catch (error) {
    return /** @type {NodeJS.ErrnoException} */ (error).code === 'EPERM';
  }
}

/**
 * Arguments of a running process, program first; empty when there is none.
 * @param {number} pid
 * @returns {string[]}
 */
export function commandLineOf(pid) {
  try {
    return readFileSync(`/proc/${pid}/cmdline`, 'utf8').split('\0').filter(Boolean);
  } catch {
    return [];
  }
}

/**
 * Working directory of a running process, or null when it can't be known.
 * @param {number} pid
 */
export function workingFolderOf(pid) {
  try {
    return readlinkSync(`/proc/${pid}/cwd`);
  } catch {
    return null;
  }
}

/**
 * Waits until a condition holds.
 * @param {() => boolean | Promise<boolean>} holds
 * @param {number} within_ms
 * @returns {Promise<boolean>} false when the time ran out
 */
export async function waitUntil(holds, within_ms) {
  const until_ms = Date.now() + within_ms;
  for (;;) {
    if (await holds()) return true;
    if (Date.now() > until_ms) return false;
    await new Promise((resolve) => setTimeout(resolve, 100));
  }
}

import { existsSync, readFileSync, renameSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { commandLineOf, isAlive } from './processes.mjs';

/**
 * @typedef {{ pid: number, url: string, children: { name: string, pid: number | null }[] }} Running
 */

const fileIn = (/** @type {string} */ folder) => join(folder, 'running.json');

/**
 * The Beadline that runs on a data folder now, or null. What a crash has left counts as nothing.
 * @param {string} folder
 * @returns {Running | null}
 */
export function readRunning(folder) {
  if (!existsSync(fileIn(folder))) return null;
  try {
    const running = JSON.parse(readFileSync(fileIn(folder), 'utf8'));
    // The number alone may by now belong to another program.
    const isOurs = commandLineOf(running.pid).some((part) => part.endsWith('start.mjs'));
    return isAlive(running.pid) && isOurs ? running : null;
  } catch {
    return null;
  }
}

/** @param {string} folder @param {Running} running */
export function writeRunning(folder, running) {
  writeFileSync(`${fileIn(folder)}.part`, `${JSON.stringify(running, null, 2)}\n`, { mode: 0o600 });
  renameSync(`${fileIn(folder)}.part`, fileIn(folder));
}

/** @param {string} folder */
export const removeRunning = (folder) => rmSync(fileIn(folder), { force: true });

import { mkdirSync, readFileSync, renameSync, rmSync, writeFileSync } from 'node:fs';
import { dirname } from 'node:path';
import { isAlive, waitUntil } from './processes.mjs';

/**
 * Does some work while no other process does work under the same lock. A lock whose owner is dead is taken over.
 * @template T
 * @param {string} path file that names the owner
 * @param {() => Promise<T>} work
 * @param {{ within_ms?: number }} [options]
 * @returns {Promise<T>}
 */
export async function withLock(path, work, { within_ms = 15 * 60_000 } = {}) {
  mkdirSync(dirname(path), { recursive: true });
  if (!(await waitUntil(() => take(path), within_ms)))
    throw new Error(`${path} is held by process ${ownerOf(path)}.`);
  try {
    return await work();
  } finally {
    rmSync(path, { force: true });
  }
}

/** @param {string} path */
function take(path) {
  try {
    writeFileSync(path, String(process.pid), { flag: 'wx' });
    return true;
  } catch (error) {
    if (/** @type {NodeJS.ErrnoException} */ (error).code !== 'EEXIST') throw error;
    const owner = ownerOf(path);
    if (owner && !isAlive(owner)) putAside(path);
    return false;
  }
}

/**
 * Of several who find a dead owner, only the one whose rename succeeds removes the lock.
 * @param {string} path
 */
function putAside(path) {
  const aside = `${path}.${process.pid}`;
  try {
    renameSync(path, aside);
    rmSync(aside, { force: true });
  } catch {
    // Another process was faster.
  }
}

/** @param {string} path */
function ownerOf(path) {
  try {
    return Number(readFileSync(path, 'utf8')) || null;
  } catch {
    return null;
  }
}

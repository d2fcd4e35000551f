import { existsSync, readFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { inRoot } from './paths.mjs';
import { PlainStop } from './plain-stop.mjs';
import { runCommand, tailOf } from './run-command.mjs';

/**
 * @typedef {{ packages: Record<string, { version?: string, optional?: boolean, dev?: boolean, link?: boolean }> }} LockFile
 */

/**
 * Whether the installed packages are those of the lock file.
 * @param {LockFile} wanted package-lock.json
 * @param {LockFile | null} installed what npm wrote down at the end of its last installation
 * @param {{ withDev: boolean }} options
 */
export function packagesAreCurrent(wanted, installed, { withDev }) {
  if (!installed) return false;
  return Object.entries(wanted.packages).every(([path, { version, optional, dev }]) => {
    if (path === '') return true;
    const there = installed.packages[path];
    // Optional packages belong to other systems, unless they are there: then they must be the right ones.
    if (!there) return optional || (dev && !withDev);
    return there.version === version;
  });
}

/**
 * Installs the packages of the lock file where they are missing or not the right ones.
 * @param {import('./say.mjs').Say} say
 * @param {{ withDev?: boolean }} [options] whether tests and checks will run too
 */
export async function ensurePackages(say, { withDev = false } = {}) {
  const wanted = readLock(inRoot('package-lock.json'));
  if (!wanted) throw new PlainStop('package-lock.json is missing: the project folder is not complete.');
  const installed = readLock(inRoot('node_modules', '.package-lock.json'));
  if (packagesAreCurrent(wanted, installed, { withDev })) return;
  await say.step('Installing packages from package-lock.json (about a minute)', async () => {
    const result = await runCommand([npmProgram(), 'ci', '--include=dev', '--no-audit', '--no-fund'], {
      cwd: inRoot(),
    });
    if (result.code !== 0)
      throw new PlainStop(
        `The packages could not be installed (npm ci ended with ${result.code}):\n${tailOf(result)}`,
      );
  });
}

/** The npm that belongs to this Node.js, wherever PATH points. */
function npmProgram() {
  const beside = join(dirname(process.execPath), 'npm');
  return existsSync(beside) ? beside : 'npm';
}

/**
 * @param {string} path
 * @returns {LockFile | null}
 */
function readLock(path) {
  try {
    return JSON.parse(readFileSync(path, 'utf8'));
  } catch {
    return null;
  }
}

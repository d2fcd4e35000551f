import { existsSync } from 'node:fs';
import { dirname, join, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';

/** Folder of the project, whatever the working directory is. */
export const ROOT = dirname(dirname(dirname(fileURLToPath(import.meta.url))));

/** @param {...string} parts */
export const inRoot = (...parts) => join(ROOT, ...parts);

/**
 * The data folder, absolute. A relative BEADLINE_DATA counts from where the command was typed.
 * @param {NodeJS.ProcessEnv} env
 */
export const dataFolder = (env) =>
  env.BEADLINE_DATA ? resolve(env.INIT_CWD ?? process.cwd(), env.BEADLINE_DATA) : inRoot('.beadline');

/**
 * First folder of PATH that holds a program, or null.
 * @param {string} name
 * @returns {string | null}
 */
export function findProgram(name) {
  for (const folder of (process.env.PATH ?? '').split(':')) {
    const path = join(folder || '.', name);
    if (existsSync(path)) return path;
  }
  return null;
}

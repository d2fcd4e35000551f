import { createHash } from 'node:crypto';
import { existsSync, readFileSync, readdirSync, statSync } from 'node:fs';
import { join, relative } from 'node:path';

/**
 * One hash over names and contents of files: the same sources give the same hash on any machine.
 * @param {string} root
 * @param {string[]} parts files and folders below `root`; absent ones count as absent
 * @returns {string} 64 hex digits
 */
export function hashSources(root, parts) {
  const hash = createHash('sha256');
  for (const path of parts.flatMap((part) => filesOf(join(root, part))).sort()) {
    hash.update(`${relative(root, path)}\0`);
    hash.update(createHash('sha256').update(readFileSync(path)).digest());
  }
  return hash.digest('hex');
}

/**
 * @param {string} path
 * @returns {string[]}
 */
function filesOf(path) {
  if (!existsSync(path)) return [];
  if (!statSync(path).isDirectory()) return [path];
  return readdirSync(path)
    .filter((name) => name !== 'node_modules' && !name.startsWith('.'))
    .flatMap((name) => filesOf(join(path, name)));
}

import { existsSync, readdirSync } from 'node:fs';
import { join, relative } from 'node:path';

/** Options of vitest whose value is the next argument, and so is no part of a file name. */
const WITH_VALUE = new Set(['-t', '--testNamePattern', '--project', '--reporter', '--exclude', '--bail']);

/**
 * Parts of file names among the arguments: vitest runs the files that contain any of them.
 * @param {string[]} args
 */
export const filtersOf = (args) =>
  args.filter((arg, i) => !arg.startsWith('-') && !WITH_VALUE.has(args[i - 1] ?? ''));

/**
 * Whether arguments select any test below a folder: what only those tests need is set up for them alone.
 * @param {string[]} args
 * @param {string} folder relative to the root
 * @param {string} root
 */
export function selectsAny(args, folder, root) {
  const filters = filtersOf(args).map((filter) => filter.replace(/^\.\//, ''));
  const files = testFiles(join(root, folder)).map((path) => relative(root, path));
  return filters.length === 0
    ? files.length > 0
    : files.some((file) => filters.some((filter) => join(root, file).includes(filter)));
}

/**
 * @param {string} folder
 * @returns {string[]}
 */
function testFiles(folder) {
  if (!existsSync(folder)) return [];
  return readdirSync(folder, { withFileTypes: true }).flatMap((entry) => {
    const path = join(folder, entry.name);
    if (entry.isDirectory()) return testFiles(path);
    return /\.(test|spec)\.tsx?$/.test(entry.name) ? [path] : [];
  });
}

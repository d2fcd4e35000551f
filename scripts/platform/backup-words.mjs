import { resolve, sep } from 'node:path';
import { PlainStop } from './plain-stop.mjs';

/**
 * The one file that a command is given. A relative name counts from where the command was typed.
 * @param {'backup' | 'restore'} command
 * @param {string} data absolute data folder
 */
export function fileArgument(command, data) {
  const args = process.argv.slice(2);
  if (args.length !== 1 || args[0].startsWith('-'))
    throw new PlainStop(`Usage: npm run ${command} -- FILE`, 2);
  const path = resolve(process.env.INIT_CWD ?? process.cwd(), args[0]);
  if (path.startsWith(`${data}${sep}`))
    throw new PlainStop('A backup inside the data folder is lost with it: name a file elsewhere.', 2);
  return path;
}

/**
 * What a backup holds, in one line.
 * @param {import('./backup-manifest.mjs').Manifest} manifest
 */
export function contentWords({ files, tables }) {
  const bytes = files.reduce((sum, file) => sum + file.bytes, 0);
  const rows = tables.reduce((sum, table) => sum + table.rows, 0);
  return `${files.length} files of ${bytes} bytes, ${rows} rows in ${tables.length} tables`;
}

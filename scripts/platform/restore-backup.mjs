import { createReadStream, existsSync, mkdirSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import { open } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { checkBackup, DUMP, sha256Of } from './backup-manifest.mjs';
import { assertEmptyDatabase, loadDatabase } from './database-dump.mjs';
import { withDatabaseOf } from './database-of.mjs';
import { PlainStop } from './plain-stop.mjs';
import { ensureDataFolder } from './secrets.mjs';
import { streamEntry } from './tar.mjs';

/** Stands in a data folder until its restore is complete: half a laboratory must not be started. */
const MARK = 'restore.unfinished';

/**
 * Refuses a data folder whose restore was cut short.
 * @param {string} data
 */
export function refuseHalfRestored(data) {
  if (existsSync(join(data, MARK)))
    throw new PlainStop(`The restore into ${data} was cut short: run \`npm run restore -- FILE\` again.`);
}

/**
 * Restores a backup into an empty data folder and an empty database, checked before and after.
 * @param {string} path of the backup, absolute
 * @param {string} data absolute
 * @param {{ say: import('./say.mjs').Say, databaseUrl?: string }} options
 * @returns {Promise<import('./backup-manifest.mjs').Manifest>} all of it is there
 */
export async function restoreBackup(path, data, { say, databaseUrl }) {
  assertEmptyFolder(data);
  const { manifest, entries } = await say.step('Checking the backup', () => checkBackup(path));
  if (databaseUrl) await assertEmptyDatabase(databaseUrl);
  // What an earlier, cut restore has left goes first; a cluster of it is made anew.
  emptyFolder(data);
  ensureDataFolder(data);
  writeFileSync(join(data, MARK), '');
  try {
    await say.step('Writing uploads and stacks', async () => {
      for (const file of manifest.files) await extract(path, entries.get(file.path), join(data, file.path));
    });
    await withDatabaseOf(data, { say, databaseUrl }, (url) =>
      say.step('Filling the database', async () => {
        await assertEmptyDatabase(url);
        assertSameRows(manifest.tables, await loadDatabase(url, join(data, DUMP), say));
      }),
    );
    await say.step('Checking what was written', () => assertSameFiles(data, manifest.files));
  } catch (error) {
    emptyFolder(data);
    if (/** @type {NodeJS.ErrnoException} */ (error).code === 'ENOSPC')
      throw new PlainStop(`There is no room for the backup in ${data}.`);
    throw error;
  }
  rmSync(join(data, DUMP));
  rmSync(join(data, MARK));
  return manifest;
}

/** @param {string} data */
function assertEmptyFolder(data) {
  if (!existsSync(data) || existsSync(join(data, MARK))) return;
  if (readdirSync(data).length > 0)
    throw new PlainStop(
      `${data} is not empty: a backup is restored only into an empty data folder. Set BEADLINE_DATA to a new one.`,
      2,
    );
}

/** The folder itself stays: it may be a mount, or owned with care. @param {string} data */
function emptyFolder(data) {
  if (!existsSync(data)) return;
  for (const name of readdirSync(data)) rmSync(join(data, name), { recursive: true, force: true });
}

/**
 * @param {string} archive
 * @param {import('./tar.mjs').TarEntry | undefined} entry
 * @param {string} target
 */
async function extract(archive, entry, target) {
  if (!entry) throw new PlainStop('The backup file was changed while it was read.');
  mkdirSync(dirname(target), { recursive: true, mode: 0o700 });
  const file = await open(target, 'wx', 0o600);
  try {
    for await (const piece of streamEntry(archive, entry)) await file.writeFile(piece);
    await file.sync();
  } finally {
    await file.close();
  }
}

/**
 * @param {string} data
 * @param {import('./backup-manifest.mjs').Manifest['files']} files
 */
async function assertSameFiles(data, files) {
  for (const { path, sha256 } of files)
    if ((await sha256Of(createReadStream(join(data, path)))) !== sha256)
      throw new PlainStop(`${path} does not come back from the disk as it was written: is the disk sound?`);
}

/**
 * @param {import('./database-dump.mjs').TableRows[]} wanted
 * @param {import('./database-dump.mjs').TableRows[]} found
 */
function assertSameRows(wanted, found) {
  const lines = (/** @type {import('./database-dump.mjs').TableRows[]} */ tables) =>
    tables.map(({ table, rows }) => `${table} ${rows}`);
  const there = new Set(lines(found));
  const missing = lines(wanted).filter((line) => !there.has(line));
  if (missing.length > 0 || found.length !== wanted.length)
    throw new PlainStop(`The database does not hold the rows of the manifest: ${missing.join(', ')}.`);
}

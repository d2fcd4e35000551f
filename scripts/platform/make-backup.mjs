import { createHash } from 'node:crypto';
import { existsSync } from 'node:fs';
import { open, readdir, rename, rm } from 'node:fs/promises';
import { join, relative, sep } from 'node:path';
import { DUMP, FOLDERS, MANIFEST, MANIFEST_HASH, manifestText, SINGLE_FILES } from './backup-manifest.mjs';
import { codeVersion } from './bundles.mjs';
import { dumpDatabase } from './database-dump.mjs';
import { withDatabaseOf } from './database-of.mjs';
import { PlainStop } from './plain-stop.mjs';
import { readSecrets } from './secrets.mjs';
import { tarEnd, tarHeader, tarPadding } from './tar.mjs';

const PIECE_BYTES = 1 << 20;

/**
 * Writes a backup of a data folder and its database into one file, which appears only when it is whole. The product
 * may run meanwhile: the database is read at one moment, and files after it, so that no row lacks its file.
 * @param {string} data absolute
 * @param {string} path of the new file, absolute
 * @param {{ say: import('./say.mjs').Say, databaseUrl?: string }} options
 * @returns {Promise<import('./backup-manifest.mjs').Manifest>}
 */
export async function makeBackup(data, path, { say, databaseUrl }) {
  if (!existsSync(data) || (!databaseUrl && !readSecrets(data)))
    throw new PlainStop(`There is no Beadline in ${data}: set BEADLINE_DATA to its data folder.`, 2);
  const dump = `${path}.dump.part`;
  const part = `${path}.part`;
  await rm(part, { force: true });
  const archive = await open(part, 'wx', 0o600).catch((error) => {
    throw new PlainStop(`${path} can't be written (${error.code}).`, 2);
  });
  try {
    // Made before pg_dump writes it, so that nobody else can read it.
    await (await open(dump, 'w', 0o600)).close();
    const { tables, server } = await withDatabaseOf(data, { say, databaseUrl }, (url) =>
      say.step('Writing down the database', () => dumpDatabase(url, dump, say)),
    );
    const files = [await addFile(archive, dump, DUMP)];
    await say.step('Copying uploads and stacks', async () => {
      for (const name of SINGLE_FILES) files.push(await addFile(archive, join(data, name), name));
      for (const folder of FOLDERS)
        for (const name of await filesBelow(data, folder))
          files.push(await addFile(archive, join(data, name), name));
    });
    const content = {
      madeAt: new Date().toISOString(),
      codeVersion: codeVersion(),
      postgres: server,
      files: files.filter((file) => file !== null),
      tables,
    };
    const [text, hash] = manifestText(content);
    for (const [name, body] of [
      [MANIFEST, text],
      [MANIFEST_HASH, hash],
    ])
      // prettier-ignore
      await addText(archive, name, body);
    await archive.writeFile(tarEnd());
    await archive.sync();
    await archive.close();
    await rename(part, path);
    return JSON.parse(text);
  } catch (error) {
    await archive.close().catch(() => {});
    await rm(part, { force: true });
    if (/** @type {NodeJS.ErrnoException} */ (error).code === 'ENOSPC')
      throw new PlainStop(`There is no room for the backup where ${path} should go.`);
    throw error;
  } finally {
    await rm(dump, { force: true });
  }
}

/**
 * Names of all files below a folder, relative to the data folder.
 * @param {string} data
 * @param {string} folder
 */
async function filesBelow(data, folder) {
  const entries = await readdir(join(data, folder), { recursive: true, withFileTypes: true }).catch(
    (error) => {
      if (error.code === 'ENOENT') return [];
      throw error;
    },
  );
  return entries
    .filter((entry) => entry.isFile())
    .map((entry) => relative(data, join(entry.parentPath, entry.name)).split(sep).join('/'))
    .sort();
}

/**
 * Copies a file as long as it is now: one that grows meanwhile is an upload, whose later bytes the sender has still.
 * @param {import('node:fs/promises').FileHandle} archive
 * @param {string} path
 * @param {string} name
 * @returns {Promise<{ path: string, bytes: number, sha256: string } | null>} null for one that has gone
 */
async function addFile(archive, path, name) {
  const file = await open(path, 'r').catch((error) => {
    if (error.code === 'ENOENT') return null;
    throw error;
  });
  if (!file) return null;
  try {
    const { size: bytes, mtimeMs } = await file.stat();
    await archive.writeFile(tarHeader({ path: name, bytes, mtime_s: Math.floor(mtimeMs / 1000) }));
    const hash = createHash('sha256');
    const buffer = Buffer.allocUnsafe(PIECE_BYTES);
    for (let at = 0; at < bytes;) {
      const { bytesRead } = await file.read(buffer, 0, Math.min(PIECE_BYTES, bytes - at), at);
      if (bytesRead === 0) throw new PlainStop(`${path} became shorter while it was copied: try again.`);
      hash.update(buffer.subarray(0, bytesRead));
      await archive.writeFile(buffer.subarray(0, bytesRead));
      at += bytesRead;
    }
    await archive.writeFile(tarPadding(bytes));
    return { path: name, bytes, sha256: hash.digest('hex') };
  } finally {
    await file.close();
  }
}

/**
 * @param {import('node:fs/promises').FileHandle} archive
 * @param {string} name
 * @param {string} text
 */
async function addText(archive, name, text) {
  const body = Buffer.from(text);
  await archive.writeFile(Buffer.concat([tarHeader({ path: name, bytes: body.length }), body]));
  await archive.writeFile(tarPadding(body.length));
}

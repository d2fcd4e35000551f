import { createHash } from 'node:crypto';
import { open } from 'node:fs/promises';
import { PlainStop } from './plain-stop.mjs';
import { readTarEntries, streamEntry } from './tar.mjs';

export const DUMP = 'database.dump';
export const MANIFEST = 'manifest.json';
/** The manifest's own hash: a changed count must not pass for the truth. */
export const MANIFEST_HASH = 'manifest.sha256';
/** What of a data folder goes into a backup. Uploads come first: one that is finished meanwhile moves to the stacks. */
export const FOLDERS = ['uploads', 'stacks'];
export const SINGLE_FILES = ['demo-accounts.json'];

const FORMAT = 'beadline-backup-1';

/**
 * @typedef {object} Manifest
 * @property {string} format
 * @property {string} madeAt ISO 8601
 * @property {string} codeVersion
 * @property {string} postgres version of the server
 * @property {{ path: string, bytes: number, sha256: string }[]} files in the order of the archive
 * @property {import('./database-dump.mjs').TableRows[]} tables
 */

/** @param {Omit<Manifest, 'format'>} content @returns {[text: string, hash: string]} */
export function manifestText(content) {
  const text = `${JSON.stringify({ format: FORMAT, ...content }, null, 1)}\n`;
  return [text, `${createHash('sha256').update(text).digest('hex')}\n`];
}

/**
 * SHA-256 of what a stream gives.
 * @param {AsyncIterable<Buffer> | Iterable<Buffer>} bytes
 */
export async function sha256Of(bytes) {
  const hash = createHash('sha256');
  for await (const piece of bytes) hash.update(piece);
  return hash.digest('hex');
}

/**
 * Reads a backup whole and compares it with its own manifest; nothing is written.
 * @param {string} path
 * @returns {Promise<{ manifest: Manifest, entries: Map<string, import('./tar.mjs').TarEntry> }>}
 * @throws PlainStop where a single byte differs
 */
export async function checkBackup(path) {
  const file = await open(path, 'r').catch(() => {
    throw new PlainStop(`${path} can't be read: is the name right?`, 2);
  });
  try {
    const list = await readTarEntries(file);
    const entries = new Map(list.map((entry) => [entry.path, entry]));
    const manifest = await readManifest(path, entries);
    const named = [...manifest.files.map((item) => item.path), MANIFEST, MANIFEST_HASH];
    if (named.join('\n') !== list.map((entry) => entry.path).join('\n'))
      throw new PlainStop('The backup file is damaged: its files are not those of its manifest.');
    for (const { path: name, bytes, sha256 } of manifest.files) {
      const entry = /** @type {import('./tar.mjs').TarEntry} */ (entries.get(name));
      assertInside(name);
      if (entry.bytes !== bytes || (await sha256Of(streamEntry(path, entry))) !== sha256)
        throw new PlainStop(`The backup file is damaged: ${name} differs from its manifest.`);
    }
    return { manifest, entries };
  } finally {
    await file.close();
  }
}

/**
 * @param {string} path
 * @param {Map<string, import('./tar.mjs').TarEntry>} entries
 * @returns {Promise<Manifest>}
 */
async function readManifest(path, entries) {
  const [text, hash] = await Promise.all(
    [MANIFEST, MANIFEST_HASH].map((name) => textOf(path, entries, name)),
  );
  if (`${createHash('sha256').update(text).digest('hex')}\n` !== hash)
    throw new PlainStop('The backup file is damaged: its manifest was changed.');
  const manifest = JSON.parse(text);
  if (manifest.format !== FORMAT)
    throw new PlainStop(`The backup is of the format '${manifest.format}', which this version can't read.`);
  return manifest;
}

/**
 * @param {string} path
 * @param {Map<string, import('./tar.mjs').TarEntry>} entries
 * @param {string} name
 */
async function textOf(path, entries, name) {
  const entry = entries.get(name);
  if (!entry) throw new PlainStop(`This is no backup of Beadline: it has no ${name}.`);
  const pieces = [];
  for await (const piece of streamEntry(path, entry)) pieces.push(piece);
  return Buffer.concat(pieces).toString('utf8');
}

/** A file that was made up must not be written anywhere else. @param {string} name */
function assertInside(name) {
  const [top, ...rest] = name.split('/');
  const isKnown = rest.length === 0 ? [DUMP, ...SINGLE_FILES].includes(name) : FOLDERS.includes(top);
  if (!isKnown || rest.some((part) => part === '' || part === '.' || part === '..'))
    throw new PlainStop(`The backup names the file ${name}, which has no place in a data folder.`);
}

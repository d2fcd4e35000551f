import { createHash } from 'node:crypto';
import {
  chmodSync,
  chownSync,
  existsSync,
  mkdirSync,
  readFileSync,
  renameSync,
  writeFileSync,
} from 'node:fs';
import { join } from 'node:path';
import { PlainStop } from './plain-stop.mjs';
import { canEnter, systemUser } from './system-user.mjs';

const STATE_FOLDER = '/var/lib/beadline';

/**
 * @typedef {object} ClusterPlace
 * @property {string} folder holds `data` and the server's helper files
 * @property {{ uid: number, gid: number } | null} user the server's user; null: ourselves
 */

/**
 * Where the private cluster of a data folder lives, made ready with the right owner.
 *
 * PostgreSQL refuses to run as root, so root hands it to the user of Debian's package. Where that user can't
 * enter the data folder, the cluster goes to the system's state directory instead.
 *
 * @param {string} dataFolder absolute
 * @param {{ clusterId: string, say: import('./say.mjs').Say }} options
 * @returns {Promise<ClusterPlace>}
 */
export async function prepareClusterPlace(dataFolder, { clusterId, say }) {
  if (process.getuid?.() !== 0) return { folder: ownFolder(join(dataFolder, 'pg'), null), user: null };
  const user = systemUser('postgres');
  if (!user)
    throw new PlainStop('There is no user `postgres`, whom the package postgresql makes: reinstall it.');
  if (await canEnter(user, dataFolder)) return { folder: ownFolder(join(dataFolder, 'pg'), user), user };
  const folder = join(STATE_FOLDER, createHash('sha256').update(dataFolder).digest('hex').slice(0, 16));
  mkdirSync(STATE_FOLDER, { recursive: true, mode: 0o711 });
  setAsideForeign(folder, clusterId, say);
  say.line(`The user postgres can't enter ${dataFolder}: the database lives in ${folder}.`);
  ownFolder(folder, user);
  writeFileSync(join(folder, 'cluster-id'), clusterId);
  return { folder, user };
}

/**
 * A data folder that was deleted leaves its cluster here. A new one at the same path must not take it over, and
 * what may be the last copy of somebody's work must not be deleted.
 * @param {string} folder
 * @param {string} clusterId
 * @param {import('./say.mjs').Say} say
 */
function setAsideForeign(folder, clusterId, say) {
  if (!existsSync(join(folder, 'data')) || readText(join(folder, 'cluster-id')) === clusterId) return;
  const aside = `${folder}.left-${new Date().toISOString().slice(0, 19).replaceAll(':', '')}`;
  renameSync(folder, aside);
  say.line(`A database of an earlier data folder at this path was put aside in ${aside}.`);
}

/** @param {string} path */
function readText(path) {
  try {
    return readFileSync(path, 'utf8').trim();
  } catch {
    return null;
  }
}

/**
 * @param {string} folder
 * @param {{ uid: number, gid: number } | null} user
 */
function ownFolder(folder, user) {
  mkdirSync(folder, { recursive: true, mode: 0o700 });
  chmodSync(folder, 0o700);
  if (user) chownSync(folder, user.uid, user.gid);
  return folder;
}

import { existsSync, mkdirSync, readFileSync, readdirSync, realpathSync, writeFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { installDebianPackage } from './debian-package.mjs';
import { findProgram } from './paths.mjs';
import { PlainStop } from './plain-stop.mjs';

const DEBIAN_HOME = '/usr/lib/postgresql';
const CREATE_CLUSTER_CONF = '/etc/postgresql-common/createcluster.conf';

/**
 * Folder of the server's programs: the wanted major version, else the newest one; null when there is none.
 * @param {{ major?: string, home?: string }} [options]
 */
export function findPostgres({ major, home = DEBIAN_HOME } = {}) {
  const versions = existsSync(home) ? readdirSync(home) : [];
  const folders = versions
    .filter((version) => !major || version === major)
    .sort((a, b) => Number(b) - Number(a))
    .map((version) => join(home, version, 'bin'));
  const found = folders.find((folder) => existsSync(join(folder, 'initdb')));
  if (found || major) return found ?? null;
  const onPath = findProgram('initdb');
  return onPath ? dirname(realpathSync(onPath)) : null;
}

/**
 * Folder of the server's programs, installed where they are missing.
 * @param {import('./say.mjs').Say} say
 * @param {string} [dataFolder] an existing cluster, which only its own major version can read
 */
export async function ensurePostgres(say, dataFolder) {
  const major = dataFolder ? majorOf(dataFolder) : undefined;
  const found = findPostgres({ major });
  if (found) return found;
  if (major) {
    const other = findPostgres();
    if (other && !other.includes(`/${major}/`) && (await versionOnPathIs(other, major))) return other;
    throw new PlainStop(
      `The data in ${dataFolder} were written by PostgreSQL ${major}, which is not installed: ` +
        `install the package \`postgresql-${major}\`.`,
    );
  }
  if (process.getuid?.() === 0) refuseDefaultCluster();
  await installDebianPackage('postgresql', { what: 'the PostgreSQL server', say });
  const installed = findPostgres();
  if (!installed)
    throw new PlainStop('The package postgresql is installed, but its programs were not found.');
  return installed;
}

/** @param {string} dataFolder */
function majorOf(dataFolder) {
  try {
    return readFileSync(join(dataFolder, 'PG_VERSION'), 'utf8').trim();
  } catch {
    return undefined;
  }
}

/**
 * Programs found on PATH have no version in their folder's name.
 * @param {string} folder
 * @param {string} major
 */
async function versionOnPathIs(folder, major) {
  const { runCommand } = await import('./run-command.mjs');
  const { stdout } = await runCommand([join(folder, 'postgres'), '--version']);
  return stdout.includes(` ${major}.`);
}

/** Debian would make and start a cluster for everybody on port 5432; ours is a private one. */
function refuseDefaultCluster() {
  if (existsSync(CREATE_CLUSTER_CONF)) return;
  mkdirSync(dirname(CREATE_CLUSTER_CONF), { recursive: true });
  writeFileSync(CREATE_CLUSTER_CONF, 'create_main_cluster = false\n');
}

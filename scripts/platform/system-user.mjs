import { readFileSync } from 'node:fs';
import { commandAs } from './tied-command.mjs';
import { runCommand } from './run-command.mjs';

/**
 * A user of this machine by name, or null.
 * @param {string} name
 * @returns {{ uid: number, gid: number } | null}
 */
export function systemUser(name) {
  const line = readFileSync('/etc/passwd', 'utf8')
    .split('\n')
    .find((entry) => entry.startsWith(`${name}:`));
  if (!line) return null;
  const [, , uid, gid] = line.split(':');
  return { uid: Number(uid), gid: Number(gid) };
}

/**
 * Whether a user can enter a folder, through all folders above it.
 * @param {{ uid: number, gid: number }} user
 * @param {string} folder
 */
export async function canEnter(user, folder) {
  const { code } = await runCommand(commandAs(['sh', '-c', 'cd "$1"', 'sh', folder], user), { cwd: '/' });
  return code === 0;
}

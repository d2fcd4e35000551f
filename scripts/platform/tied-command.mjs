import { findProgram } from './paths.mjs';

/**
 * The command as a process that the kernel signals when its parent dies, even by SIGKILL: nothing may be left
 * behind that would hold the port or the data folder. On a system without setpriv the command runs untied.
 * @param {string[]} command
 * @param {{ signal?: string, user?: { uid: number, gid: number } | null }} [options] user to run it as
 * @returns {string[]}
 */
export function tiedCommand(command, { signal = 'TERM', user = null } = {}) {
  const setpriv = findProgram('setpriv');
  if (!setpriv) return command;
  return [setpriv, ...asUser(user), '--pdeathsig', signal, ...command];
}

/**
 * The command run as another user; needs root.
 * @param {string[]} command
 * @param {{ uid: number, gid: number } | null} user null: as we are
 * @returns {string[]}
 */
export function commandAs(command, user) {
  return user ? [findProgram('setpriv') ?? 'setpriv', ...asUser(user), ...command] : command;
}

/** @param {{ uid: number, gid: number } | null} user */
const asUser = (user) => (user ? [`--reuid=${user.uid}`, `--regid=${user.gid}`, '--init-groups'] : []);

import { PlainStop } from './plain-stop.mjs';
import { findProgram } from './paths.mjs';
import { runCommand, tailOf } from './run-command.mjs';

const isRoot = () => process.getuid?.() === 0;

/**
 * Installs one package of Debian, or says who can.
 * @param {string} name
 * @param {{ what: string, say: import('./say.mjs').Say }} options what the package brings, in words
 */
export async function installDebianPackage(name, { what, say }) {
  const aptGet = findProgram('apt-get');
  if (!isRoot() || !aptGet)
    throw new PlainStop(
      `${what[0].toUpperCase()}${what.slice(1)} is not installed and this user may not install it: ` +
        `ask an administrator for the package \`${name}\` (apt-get install ${name}).`,
    );
  await say.step(`Installing ${what} (Debian's package ${name})`, async () => {
    const apt = (/** @type {string[]} */ ...args) =>
      runCommand([aptGet, '-q', '-o', 'DPkg::Lock::Timeout=300', ...args], {
        env: { ...process.env, DEBIAN_FRONTEND: 'noninteractive' },
      });
    // Lists may be missing altogether on a fresh machine; when they can't be had the installation will say why.
    await apt('update');
    const result = await apt('install', '-y', '--no-install-recommends', name);
    if (result.code !== 0)
      throw new PlainStop(`The package ${name} could not be installed:\n${tailOf(result)}`);
  });
}

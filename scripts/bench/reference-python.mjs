import { installDebianPackage } from '../platform/debian-package.mjs';
import { PlainStop } from '../platform/plain-stop.mjs';
import { runCommand } from '../platform/run-command.mjs';

/** Debian's own interpreter comes first: that is the one which its package extends. */
const INTERPRETERS = ['/usr/bin/python3', 'python3'];

/** @param {string} python */
const hasSciPy = async (python) => (await runCommand([python, '-c', 'import scipy.spatial'])).code === 0;

/**
 * A Python with SciPy, installed where that is missing and allowed; null, and why, when there is none.
 * @param {import('../platform/say.mjs').Say} say
 * @returns {Promise<string | null>}
 */
export async function ensureReferencePython(say) {
  for (const python of INTERPRETERS) if (await hasSciPy(python)) return python;
  try {
    await installDebianPackage('python3-scipy', { what: 'SciPy for the comparison', say });
    if (await hasSciPy(INTERPRETERS[0])) return INTERPRETERS[0];
    say.line('The package python3-scipy is installed, but does not load: no ratios are shown.');
  } catch (error) {
    if (!(error instanceof PlainStop)) throw error;
    say.line(`${error.message} No ratios are shown.`);
  }
  return null;
}

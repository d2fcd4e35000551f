import { installDebianPackage } from './debian-package.mjs';
import { PlainStop } from './plain-stop.mjs';
import { runCommand } from './run-command.mjs';

const PYTHON = '/usr/bin/python3';
/** Debian's packages and what each brings: programs other than ours that open what we export. */
const PACKAGES = /** @type {const} */ ([
  ['python3-h5py', 'h5py'],
  ['python3-pandas', 'pandas'],
]);

/** @param {string} module */
const loads = async (module) => (await runCommand([PYTHON, '-c', `import ${module}`])).code === 0;

/**
 * Debian's Python with h5py and pandas, for tests that open exported files; installed where it is missing.
 * @param {import('./say.mjs').Say} say
 * @returns {Promise<string>}
 */
export async function ensurePythonReaders(say) {
  for (const [name, module] of PACKAGES) {
    if (await loads(module)) continue;
    await installDebianPackage(name, { what: `${module} for Python`, say });
    if (!(await loads(module))) throw new PlainStop(`The package ${name} is installed, but does not load.`);
  }
  return PYTHON;
}

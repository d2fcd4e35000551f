import { installDebianPackage } from './debian-package.mjs';
import { findProgram } from './paths.mjs';
import { PlainStop } from './plain-stop.mjs';

/** Names under which distributions ship the browser. */
const NAMES = ['chromium', 'chromium-browser', 'google-chrome'];

/**
 * Path of a Chromium for the browser tests, installed where it is missing.
 * @param {import('./say.mjs').Say} say
 */
export async function ensureChromium(say) {
  const find = () => NAMES.map(findProgram).find((path) => path !== null);
  const found = find();
  if (found) return found;
  await installDebianPackage('chromium', { what: 'the browser Chromium', say });
  const installed = find();
  if (!installed) throw new PlainStop('The package chromium is installed, but its program was not found.');
  return installed;
}

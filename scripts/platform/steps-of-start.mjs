import { bundlePath } from './bundles.mjs';
import { ROOT } from './paths.mjs';
import { PlainStop } from './plain-stop.mjs';
import { runCommand, tailOf } from './run-command.mjs';

const runBundle = (/** @type {string} */ name, /** @type {NodeJS.ProcessEnv} */ env, showErrors = false) =>
  runCommand([process.execPath, '--enable-source-maps', bundlePath(name)], { cwd: ROOT, env, showErrors });

/**
 * What migrations need to know: they run as the owner of the tables, and give the application's role its rights.
 * @param {{ ownerUrl: string, applicationUrl: string }} database
 */
export function migrationEnv({ ownerUrl, applicationUrl }) {
  const [owner, application] = [new URL(ownerUrl).username, new URL(applicationUrl).username];
  return {
    DATABASE_URL: ownerUrl,
    ...(owner === application ? {} : { BEADLINE_APPLICATION_ROLE: decodeURIComponent(application) }),
  };
}

/**
 * Brings the tables up to date.
 * @param {NodeJS.ProcessEnv} env with DATABASE_URL
 * @param {import('./say.mjs').Say} say
 */
export const migrate = (env, say) =>
  say.step('Bringing the tables up to date', async () => {
    const result = await runBundle('migrate', env);
    if (result.code !== 0) throw new PlainStop(result.stderr.trim() || tailOf(result));
    for (const name of result.stdout.split('\n').filter(Boolean)) say.line(`  ${name}`);
  });

/**
 * Makes the demo laboratory, or what is missing of it.
 * @param {NodeJS.ProcessEnv} env
 * @param {import('./say.mjs').Say} say
 * @returns {Promise<string>} how to sign in, as the demo tells it
 */
export const makeDemo = (env, say) =>
  say.step('Preparing the demo laboratory', async () => {
    const result = await runBundle('demo', env, true);
    if (result.code !== 0) throw new PlainStop(`The demo laboratory could not be made:\n${tailOf(result)}`);
    return result.stdout.trimEnd();
  });

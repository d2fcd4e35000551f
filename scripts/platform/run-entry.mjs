import { pathToFileURL } from 'node:url';
import { bundlePath, codeVersion, ensureBundles } from './bundles.mjs';
import { ensurePackages } from './ensure-packages.mjs';
import { answersOn } from './free-port.mjs';
import { dataFolder, ROOT } from './paths.mjs';
import { PlainStop, runToExit } from './plain-stop.mjs';
import { sayOn } from './say.mjs';
import { applicationUrl, privateDatabaseUrl, readSecrets } from './secrets.mjs';

/**
 * Runs a bundled program in this process, with what it needs to know in its environment. Standard output
 * belongs to the program: all that is said here goes to standard error.
 *
 * @param {string} name of the entry
 * @param {{ database: 'needed' | 'none' }} options
 */
export const runEntry = (name, { database }) =>
  runToExit(async () => {
    const say = sayOn(process.stderr);
    await ensurePackages(say);
    await ensureBundles({ names: [name], say });
    process.env.BEADLINE_DATA = dataFolder(process.env);
    process.env.BEADLINE_ROOT = ROOT;
    process.env.BEADLINE_CODE_VERSION = codeVersion();
    process.env.NODE_ENV ??= 'production';
    if (database === 'needed') await knowDatabase(process.env.BEADLINE_DATA);
    standWhereTyped(name);
    process.setSourceMapsEnabled(true);
    await import(pathToFileURL(bundlePath(name)).href);
  });

/**
 * The database named by the caller, else the private one of the data folder, which must be running.
 * @param {string} data
 */
async function knowDatabase(data) {
  const secrets = readSecrets(data);
  if (secrets) process.env.NEXTAUTH_SECRET ??= secrets.nextauthSecret;
  if (process.env.DATABASE_URL) return;
  if (!secrets?.databasePort || !(await answersOn('127.0.0.1', secrets.databasePort)))
    throw new PlainStop(
      `Beadline does not run on ${data}: start it with \`npm start\`, or set DATABASE_URL.`,
      2,
    );
  // A product that was started before it had this role runs as the owner still.
  process.env.DATABASE_URL = secrets.applicationPassword
    ? applicationUrl(secrets)
    : privateDatabaseUrl(secrets);
}

/**
 * npm moves to the project folder; file names on the command line count from where the person typed it.
 * @param {string} name
 */
function standWhereTyped(name) {
  const { INIT_CWD, npm_lifecycle_event } = process.env;
  if (INIT_CWD && npm_lifecycle_event === name) process.chdir(INIT_CWD);
}

import { availableParallelism } from 'node:os';
import { dataFolder } from './paths.mjs';
import { PlainStop } from './plain-stop.mjs';

const PORT_MAX = 65_535;
const WORKERS_MAX = 64;

/**
 * What the environment asks of a start.
 * @param {NodeJS.ProcessEnv} env
 */
export function readStartSettings(env) {
  const port = wholeNumber(env, 'PORT', { fallback: 3000, low: 1, high: PORT_MAX });
  const databaseUrl = env.DATABASE_URL || null;
  if (databaseUrl && !/^postgres(ql)?:\/\//.test(databaseUrl))
    throw new PlainStop('DATABASE_URL must begin with postgres:// or postgresql://.', 2);
  const ownerUrl = env.DATABASE_OWNER_URL || null;
  if (ownerUrl && (!databaseUrl || !sameDatabase(ownerUrl, databaseUrl)))
    throw new PlainStop(
      'DATABASE_OWNER_URL must name the same database as DATABASE_URL, by the role that owns its tables.',
      2,
    );
  const smtpUrl = env.BEADLINE_SMTP_URL?.trim();
  // Said now rather than by the first mail that does not leave; without the value, which holds a password.
  if (smtpUrl && !/^smtps?:\/\/[^/]/.test(smtpUrl))
    throw new PlainStop('BEADLINE_SMTP_URL must begin with smtp:// or smtps:// and name a host.', 2);
  if (smtpUrl && !env.BEADLINE_MAIL_FROM?.includes('@'))
    throw new PlainStop('BEADLINE_SMTP_URL is set: name the sender of mail in BEADLINE_MAIL_FROM.', 2);
  return {
    port,
    url: `http://127.0.0.1:${port}`,
    data: dataFolder(env),
    databaseUrl,
    ownerUrl: ownerUrl ?? databaseUrl,
    workers: wholeNumber(env, 'BEADLINE_WORKERS', {
      fallback: availableParallelism(),
      low: 0,
      high: WORKERS_MAX,
    }),
    withDemo: env.BEADLINE_DEMO !== '0',
  };
}

/**
 * @param {string} one
 * @param {string} other
 */
function sameDatabase(one, other) {
  if (!URL.canParse(one) || !URL.canParse(other)) return false;
  const [a, b] = [new URL(one), new URL(other)];
  const port = (/** @type {URL} */ url) => url.port || '5432';
  return a.hostname === b.hostname && port(a) === port(b) && a.pathname === b.pathname;
}

/**
 * @param {NodeJS.ProcessEnv} env
 * @param {string} name
 * @param {{ fallback: number, low: number, high: number }} range
 */
function wholeNumber(env, name, { fallback, low, high }) {
  const text = env[name]?.trim();
  if (!text) return fallback;
  const value = Number(text);
  if (!Number.isInteger(value) || value < low || value > high)
    throw new PlainStop(`${name} must be a whole number from ${low} to ${high}. Received '${text}'.`, 2);
  return value;
}

import { resolve } from 'node:path';

/** A setting that is missing or can't be right: whoever runs the server can mend it. */
export class SettingError extends Error {
  override name = 'SettingError';
}

/**
 * What a laboratory's administrator may bound, with the usual values. Each is set by BEADLINE_LIMIT_ and the
 * name in upper case, as in BEADLINE_LIMIT_UPLOAD_BYTES.
 */
const LIMITS = {
  uploadBytes: 50e9,
  uploadsAtOnce: 16,
  uploadIdleHours: 24 * 7,
  changesPerMinute: 600,
  exportsPerHour: 60,
  analysesPerHour: 200,
  signInsPerAccount: 5,
  signInsPerAddress: 30,
  tryOutsAtOnce: 2,
  labBytes: 5e12,
  nightlyCheckBytes: 100e9,
  childMemoryMB: 2048,
  // After a correction, results are measured again once nobody has corrected for so long.
  quietSeconds: 60,
} as const;

export type LimitName = keyof typeof LIMITS;

/** Folder of the project: bundles of other processes are found from it. */
export const rootDir = (): string => process.env.BEADLINE_ROOT ?? process.cwd();

/** Data folder, absolute: uploads, stacks, logs and secrets live below it. */
export const dataDir = (): string =>
  // The build must not take a path that is known only at run time for a wish to ship the whole project.
  resolve(/* turbopackIgnore: true */ process.env.BEADLINE_DATA || `${rootDir()}/.beadline`);

/** Address of the PostgreSQL database. @throws SettingError when it is not set */
export const databaseUrl = (): string => needed('DATABASE_URL');

/** Object store for stacks and exports, see `readS3Setting`; null keeps them in the data folder. */
export const storeUrl = (): string | null => process.env.BEADLINE_S3_URL?.trim() || null;

/** Key that signs sessions. @throws SettingError when it is not set */
export const sessionSecret = (): string => needed('NEXTAUTH_SECRET');

/** TCP port of the web server. */
export const port = (): number => wholeNumber('PORT', 3000);

/** Origin that browsers see, without a slash at the end. */
export const baseUrl = (): string =>
  (process.env.NEXTAUTH_URL || `http://127.0.0.1:${port()}`).replace(/\/+$/, '');

/** Version of the code that computes, written beside each result. */
export const codeVersion = (): string => process.env.BEADLINE_CODE_VERSION || 'unbuilt';

/**
 * Which kernels compute: 'auto' takes the fastest that run here, 'plain' those without WebAssembly.
 * @throws SettingError when it is neither
 */
export function kernelChoice(): 'auto' | 'plain' {
  const value = process.env.BEADLINE_KERNELS?.trim() || 'auto';
  if (value === 'auto' || value === 'plain') return value;
  throw new SettingError(`BEADLINE_KERNELS must be auto or plain. Received '${value}'.`);
}

/** A bound as set, else the usual one. @throws SettingError when what is set is not a number above 0 */
export function limit(name: LimitName): number {
  const variable = `BEADLINE_LIMIT_${name.replace(/([a-z])([A-Z])/g, '$1_$2').toUpperCase()}`;
  return wholeNumber(variable, LIMITS[name]);
}

function needed(name: string): string {
  const value = process.env[name];
  if (!value) throw new SettingError(`${name} is not set: start through \`npm start\`, or set it.`);
  return value;
}

function wholeNumber(name: string, usual: number): number {
  const text = process.env[name]?.trim();
  if (!text) return usual;
  const value = Number(text);
  if (!Number.isSafeInteger(value) || value < 1)
    throw new SettingError(`${name} must be a whole number above 0. Received '${text}'.`);
  return value;
}

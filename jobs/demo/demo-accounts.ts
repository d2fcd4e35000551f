import { randomBytes } from 'node:crypto';
import { readFile, rename, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { z } from 'zod';
import { ROLES } from '@/lib/access';
import { dataDir } from '@/lib/env';
import { DEMO_LAB, DEMO_PEOPLE } from './demo-people';

const fileSchema = z.object({
  laboratory: z.string(),
  accounts: z.array(
    z.object({ role: z.enum(ROLES), name: z.string(), email: z.string(), password: z.string() }),
  ),
  /** Recordings made so far, by their key. */
  recordings: z.record(z.string(), z.uuid()),
  /** Rehearsals made so far, likewise; files of earlier versions have none. */
  rehearsals: z.record(z.string(), z.uuid()).default({}),
});
export type DemoFile = z.infer<typeof fileSchema>;

/** 15 random bytes are 20 characters and 120 bits. */
const PASSWORD_BYTES = 15;

const place = (): string => join(dataDir(), 'demo-accounts.json');

/** What an earlier start left; null at the first start, or when the file can't be read. */
export async function readDemoFile(): Promise<DemoFile | null> {
  const text = await readFile(place(), 'utf8').catch(() => null);
  if (text === null) return null;
  try {
    return fileSchema.parse(JSON.parse(text));
  } catch {
    return null;
  }
}

/** Readable by its owner alone, and never half written. */
export async function writeDemoFile(file: DemoFile): Promise<void> {
  const part = `${place()}.part`;
  await writeFile(part, `${JSON.stringify(file, null, 2)}\n`, { mode: 0o600 });
  await rename(part, place());
}

/** Accounts with passwords that nobody can guess. */
export function newDemoFile(): DemoFile {
  const accounts = DEMO_PEOPLE.map(({ role, name, email }) => ({
    role,
    name,
    email,
    password: randomBytes(PASSWORD_BYTES).toString('base64url'),
  }));
  return { laboratory: DEMO_LAB.name, accounts, recordings: {}, rehearsals: {} };
}

/** How to sign in, for the terminal. */
export function signInText({ laboratory, accounts }: DemoFile): string {
  const width = Math.max(...accounts.map(({ email }) => email.length));
  const lines = accounts.map(({ email, password }) => `  ${email.padEnd(width)}  ${password}`);
  return [`${laboratory} (invented people, simulated recordings). Sign in with:`, ...lines].join('\n');
}

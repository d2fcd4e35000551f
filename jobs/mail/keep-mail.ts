import { mkdir, open, readdir, rename, rm, stat } from 'node:fs/promises';
import { join } from 'node:path';
import { dataDir } from '@/lib/env';

/** Where mail is kept for want of a mail server: a file of RFC 5322 for each, which any mail program opens. */
export const mailFolder = (): string => join(dataDir(), 'mail');

export const keptMailFile = (mailId: string): string => join(mailFolder(), `${mailId}.eml`);

/** Links in these files open accounts: nobody but the product's own user may read them. */
export async function keepMail(mailId: string, message: Buffer): Promise<void> {
  await mkdir(mailFolder(), { recursive: true, mode: 0o700 });
  const path = keptMailFile(mailId);
  const file = await open(`${path}.part`, 'w', 0o600);
  try {
    await file.writeFile(message);
    await file.sync();
  } finally {
    await file.close();
  }
  await rename(`${path}.part`, path);
}

/** Removes kept mail that is older than so many days. @returns how many */
export async function dropKeptMail(olderThanDays: number, now = new Date()): Promise<number> {
  const names = await readdir(mailFolder()).catch(() => []);
  let dropped = 0;
  for (const path of names.map((name) => join(mailFolder(), name))) {
    // Another web server may clear up at the same moment.
    const file = await stat(path).catch(() => null);
    if (!file || now.getTime() - file.mtimeMs < olderThanDays * 86_400_000) continue;
    await rm(path, { force: true });
    dropped++;
  }
  return dropped;
}

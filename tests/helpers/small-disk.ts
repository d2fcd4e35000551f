import { execFileSync } from 'node:child_process';
import { mkdirSync, mkdtempSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';

/** A disk of its own that can fill up or turn read-only. */
export interface SmallDisk {
  folder: string;
  readOnly(on: boolean): void;
  remove(): void;
}

/** A disk in memory of so many megabytes; null where this user may not mount one. */
export function smallDisk(megabytes: number): SmallDisk | null {
  const folder = mkdtempSync(join(process.env.TEST_FOLDER ?? tmpdir(), 'disk-'));
  mkdirSync(folder, { recursive: true });
  const mount = (options: string) =>
    execFileSync('mount', ['-t', 'tmpfs', '-o', options, 'tmpfs', folder], { stdio: 'ignore' });
  try {
    mount(`size=${megabytes}m`);
  } catch {
    return null;
  }
  return {
    folder,
    readOnly: (on) => mount(`remount,${on ? 'ro' : 'rw'}`),
    remove: () => void execFileSync('umount', ['-l', folder], { stdio: 'ignore' }),
  };
}

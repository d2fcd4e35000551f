import { execFileSync } from 'node:child_process';
import { chmodSync, mkdtempSync, rmSync, statfsSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';

export interface SmallDisk {
  /** Where it is mounted; every user may pass through. */
  folder: string;
  /** Fills it until so many bytes are left, to the page. */
  leave(bytes: number): void;
  /** Takes the filling away again. */
  clear(): void;
  /** As a disk that the system has stopped writing to after errors. */
  readOnly(is: boolean): void;
  /** Gone, as a network folder whose server is away. */
  unmount(): void;
  mount(): void;
  remove(): void;
}

const mount = (...args: string[]) => execFileSync('mount', args, { stdio: 'pipe' });

/** Mounting needs root: elsewhere these faults can't be made, and their tests say that they were left out. */
export const mayMount: boolean = (() => {
  if (process.getuid?.() !== 0) return false;
  const folder = mkdtempSync(join(tmpdir(), 'beadline-mount-'));
  try {
    mount('-t', 'tmpfs', '-o', 'size=1m', 'tmpfs', folder);
    execFileSync('umount', [folder]);
    return true;
  } catch {
    return false;
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
})();

/** A disk of its own in memory. */
export function makeSmallDisk(megabytes: number): SmallDisk {
  const folder = mkdtempSync(join(process.env.TEST_FOLDER ?? tmpdir(), 'disk-'));
  const ballast = join(folder, 'ballast');
  const disk: SmallDisk = {
    folder,
    leave(bytes) {
      disk.clear();
      // An empty file first: it may itself need room.
      writeFileSync(ballast, '');
      const { bavail, bsize } = statfsSync(folder);
      const size = bavail * bsize - bytes;
      if (size > 0) execFileSync('fallocate', ['-l', String(size), ballast]);
    },
    clear: () => rmSync(ballast, { force: true }),
    readOnly: (is) => void mount('-o', `remount,${is ? 'ro' : 'rw'}`, folder),
    unmount: () => void execFileSync('umount', ['-l', folder]),
    mount() {
      mount('-t', 'tmpfs', '-o', `size=${megabytes}m`, 'tmpfs', folder);
      chmodSync(folder, 0o711);
    },
    remove() {
      try {
        disk.unmount();
      } catch {
        // Not mounted at the moment.
      }
      rmSync(folder, { recursive: true, force: true });
    },
  };
  disk.mount();
  return disk;
}

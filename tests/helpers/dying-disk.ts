import type * as fs from 'node:fs/promises';

type Disk = typeof fs;

/**
 * Calls of `node:fs/promises` by which work becomes visible on disk, counted; at the n-th of them, and at all that
 * follow, nothing happens but a failure: what is on disk is then what a process leaves that was killed there, since no
 * tidying up goes through either. For `vi.mock('node:fs/promises')`.
 */
export const disk = { at: Infinity, count: 0, isDead: false, below: '' };

class Dead extends Error {
  override name = 'Dead';
}

type Call = (...args: never[]) => Promise<unknown>;

const dying =
  (call: Call, weight: number): Call =>
  async (...args) => {
    if (!String(args[0]).includes(disk.below)) return call(...args);
    disk.count += weight;
    if (disk.isDead || disk.count >= disk.at) {
      disk.isDead = true;
      throw new Dead('killed here');
    }
    return call(...args);
  };

/** By these something appears under its name. */
const COUNTED = ['rename', 'link', 'writeFile'] as const;
/** These only tidy and prepare; a dead process does neither. */
const STOPPED = ['mkdir', 'rm'] as const;

export function dyingDisk(real: Disk): Disk {
  const all = [...COUNTED.map((name) => [name, 1] as const), ...STOPPED.map((name) => [name, 0] as const)];
  const calls = all.map(([name, weight]) => [name, dying(real[name] as unknown as Call, weight)]);
  return { ...real, ...(Object.fromEntries(calls) as object) };
}

/** The next process has the disk to itself. */
export function revive(): void {
  Object.assign(disk, { at: Infinity, count: 0, isDead: false });
}

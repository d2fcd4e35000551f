import { spawnSync } from 'node:child_process';
import { existsSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { withLock } from '@/scripts/platform/lock.mjs';

const folder = mkdtempSync(join(tmpdir(), 'beadline-lock-'));
afterAll(() => rmSync(folder, { recursive: true }));

describe('work under a lock', () => {
  it('never overlaps and leaves no lock behind, also when it fails', async () => {
    const path = join(folder, 'one');
    let inside = 0;
    let most = 0;
    const work = async () => {
      most = Math.max(most, ++inside);
      await new Promise((resolve) => setTimeout(resolve, 20));
      inside--;
    };
    await Promise.all([withLock(path, work), withLock(path, work), withLock(path, work)]);
    expect(most).toBe(1);
    await expect(withLock(path, () => Promise.reject(new Error('broken')))).rejects.toThrow('broken');
    expect(existsSync(path)).toBe(false);
  });

  it('takes over from a process that died with it', async () => {
    const path = join(folder, 'two');
    const dead = spawnSync('true').pid;
    writeFileSync(path, String(dead));
    expect(await withLock(path, async () => 'done', { within_ms: 5_000 })).toBe('done');
  });
});

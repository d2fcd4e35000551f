import { mkdirSync, mkdtempSync, renameSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { hashSources } from '@/scripts/platform/source-hash.mjs';

let root: string;

beforeEach(() => {
  root = mkdtempSync(join(tmpdir(), 'beadline-hash-'));
  mkdirSync(join(root, 'lib', 'deep'), { recursive: true });
  writeFileSync(join(root, 'lib', 'a.ts'), 'one');
  writeFileSync(join(root, 'lib', 'deep', 'b.ts'), 'two');
});

afterEach(() => rmSync(root, { recursive: true }));

describe('the hash that decides whether something is built again', () => {
  it('is the same for the same files at another place', () => {
    const before = hashSources(root, ['lib']);
    renameSync(root, `${root}-moved`);
    root = `${root}-moved`;
    expect(hashSources(root, ['lib'])).toBe(before);
  });

  it('changes with a content, with a name and with a new file', () => {
    const seen = new Set([hashSources(root, ['lib'])]);
    writeFileSync(join(root, 'lib', 'deep', 'b.ts'), 'three');
    seen.add(hashSources(root, ['lib']));
    renameSync(join(root, 'lib', 'deep', 'b.ts'), join(root, 'lib', 'deep', 'c.ts'));
    seen.add(hashSources(root, ['lib']));
    writeFileSync(join(root, 'lib', 'new.ts'), '');
    seen.add(hashSources(root, ['lib']));
    expect(seen.size).toBe(4);
  });

  it('does not mix up what moves from the end of one file to the start of the next', () => {
    writeFileSync(join(root, 'x'), 'ab');
    writeFileSync(join(root, 'y'), 'c');
    const before = hashSources(root, ['x', 'y']);
    writeFileSync(join(root, 'x'), 'a');
    writeFileSync(join(root, 'y'), 'bc');
    expect(hashSources(root, ['x', 'y'])).not.toBe(before);
  });
});

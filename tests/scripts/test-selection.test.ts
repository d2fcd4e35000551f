import { describe, expect, it } from 'vitest';
import { filtersOf, selectsAny } from '@/scripts/platform/test-selection.mjs';

const root = process.cwd();

describe('which tests the arguments choose', () => {
  it('takes option values for no part of a file name', () => {
    expect(filtersOf(['tests/lib', '-t', 'some title', '--bail', '1', '--silent'])).toEqual(['tests/lib']);
  });

  it('chooses a folder by no argument, by its name and by a part of a file name in it', () => {
    expect(selectsAny([], 'tests/scripts', root)).toBe(true);
    expect(selectsAny(['tests/scripts'], 'tests/scripts', root)).toBe(true);
    expect(selectsAny(['test-selection'], 'tests/scripts', root)).toBe(true);
    expect(selectsAny(['tests/tracking'], 'tests/scripts', root)).toBe(false);
    expect(selectsAny([], 'tests/no-such-folder', root)).toBe(false);
  });
});

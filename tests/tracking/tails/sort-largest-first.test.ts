import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { sortLargestFirst } from '@/tracking/tails/sort-largest-first';

const sorted = (pairs: readonly (readonly [number, number])[]) => {
  const size = Float64Array.from(pairs, ([s]) => s);
  const owner = Uint32Array.from(pairs, ([, o]) => o);
  sortLargestFirst(size, owner);
  return Array.from(size, (s, k) => [s, owner[k]]);
};

describe('sizes from the largest on with their owners', () => {
  it('stand as the sort of the language puts them, also where many are equal', () => {
    const size = fc.oneof(fc.integer({ min: 0, max: 5 }), fc.double({ min: 0, max: 1, noNaN: true }));
    const pairs = fc.array(fc.tuple(size, fc.integer({ min: 0, max: 50 })), { maxLength: 300 });
    fc.assert(
      fc.property(pairs, (given) => {
        // -0 and 0 are the same size.
        const one = given.map(([s, o]) => [s + 0, o] as const);
        expect(sorted(one)).toEqual([...one].sort((a, b) => b[0] - a[0] || a[1] - b[1]));
      }),
      { numRuns: 200, seed: 3 },
    );
  });

  it.each([
    ['rising', (k: number) => k],
    ['falling', (k: number) => -k],
    ['all equal', () => 1],
    ['an organ pipe', (k: number) => Math.min(k, 100_000 - k)],
  ])('are sorted at once where they come %s', (_, of) => {
    const pairs = Array.from({ length: 100_000 }, (_, k) => [of(k), k % 977] as const);
    const out = sorted(pairs);
    for (let k = 1; k < out.length; k++) {
      const [before, here] = [out[k - 1], out[k]];
      if (before[0] < here[0] || (before[0] === here[0] && before[1] > here[1]))
        throw new Error(`place ${k} is wrong`);
    }
  });
});

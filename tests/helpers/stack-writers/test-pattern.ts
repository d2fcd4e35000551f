import { createRandom } from '@/tracking/random';

/**
 * Pages of samples with flat runs, slopes and noise over the whole range given, so that every branch of
 * a run-length or dictionary coder is used.
 */
export function testPages(
  pages: number,
  samples: number,
  range: { from: number; to: number; fraction?: boolean },
  seed = 1,
): number[][] {
  const random = createRandom(seed);
  const { from, to, fraction = false } = range;
  return Array.from({ length: pages }, (_, page) =>
    Array.from({ length: samples }, (_, i) => {
      const part = Math.floor((i * 4) / samples);
      const level = [0, (page + 1) / (pages + 1), (i % 97) / 96, random.uniform()][part]!;
      const value = from + level * (to - from);
      // Adding 0 makes -0 plain, which whole numbers cannot store.
      return fraction ? Math.fround(value) : Math.round(value) + 0;
    }),
  );
}

import { expect, test } from 'vitest';
import { thinSeries } from '@/lib/thin-series';

test('a thinned series keeps its largest value and its length limit', () => {
  const values = Array.from({ length: 10_007 }, (_, i) => (i === 7_321 ? 99 : i % 5));
  const thin = thinSeries(values, 300);
  expect(thin).toHaveLength(300);
  expect(Math.max(...thin)).toBe(99);
  expect(thin.indexOf(99)).toBe(Math.floor((7_321 * 300) / 10_007));
});

test('a short series stays as it is', () => {
  expect(thinSeries([3, 1, 2], 300)).toEqual([3, 1, 2]);
});

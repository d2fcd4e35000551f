import { expect, test } from 'vitest';
import { ClusteredRatios } from '@/tracking/resampling/clustered-ratios';
import { sumClusters } from '@/tracking/resampling/sum-clusters';
import { createRandom } from '@/tracking/random';

test('what tracks give adds up by cluster as if every cluster had its own sums', () => {
  const random = createRandom(3);
  const tracks = 500;
  const cluster = Array.from({ length: tracks }, () => Math.floor(40 * random.uniform()) - 20);
  const value = Array.from({ length: tracks }, () => random.normal());
  // Clusters below -15 are left out.
  const found = sumClusters(
    2,
    tracks,
    (i) => (cluster[i] < -15 ? null : cluster[i]),
    (i, sum, count) => {
      sum[i % 2] += value[i];
      count[i % 2]++;
    },
  );
  const expected = new ClusteredRatios(2);
  for (let c = -15; c < 20; c++) {
    const [sum, count] = [
      [0, 0],
      [0, 0],
    ];
    cluster.forEach((of, i) => {
      if (of !== c) return;
      sum[i % 2] += value[i];
      count[i % 2]++;
    });
    expected.add(sum, count);
  }
  for (const column of [0, 1]) {
    expect(found.ratio(column).clusters).toBe(expected.ratio(column).clusters);
    expect(found.ratio(column).count).toBe(expected.ratio(column).count);
    expect(found.ratio(column).value).toBeCloseTo(expected.ratio(column).value, 12);
    expect(found.ratio(column).error).toBeCloseTo(expected.ratio(column).error, 12);
  }
});

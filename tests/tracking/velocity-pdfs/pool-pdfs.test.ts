import { describe, expect, it } from 'vitest';
import { createRandom } from '@/tracking/random';
import { poolPdfs, type RunPdf } from '@/tracking/velocity-pdfs/pool-pdfs';
import { expectWithin } from '../../helpers/expect-within';

const run = (edges: number[], density: number[], half = 0): RunPdf => ({
  edges,
  density,
  low: density.map((p) => p - half),
  high: density.map((p) => p + half),
});
const integral = (edges: readonly number[], density: readonly number[]) =>
  density.reduce((sum, p, i) => sum + p * (edges[i + 1] - edges[i]), 0);

describe('pooling distributions of runs', () => {
  it('conserves probability whatever the bins of each run', () => {
    const random = createRandom(4);
    for (let trial = 0; trial < 100; trial++) {
      const runs = Array.from({ length: 3 }, () => {
        const bins = 5 + Math.floor(20 * random.uniform());
        const edges = [random.normal()];
        for (let i = 0; i < bins; i++) edges.push(edges[i] + 0.05 + random.uniform());
        const raw = Array.from({ length: bins }, () => random.uniform());
        const total = integral(edges, raw);
        return run(edges, raw.map((p) => p / total)); // prettier-ignore
      });
      const pooled = poolPdfs(runs);
      expectWithin(integral(pooled.edges, pooled.density), 1, { rel: 1e-9 });
      for (const one of pooled.runs) expectWithin(integral(pooled.edges, one), 1, { rel: 1e-9 });
    }
  });

  it('counts each run once, and gives the mean and scatter that follow by hand', () => {
    // Two runs of two bins: densities 0.2 and 0.8, then 0.6 and 0.4.
    const pooled = poolPdfs([run([0, 1, 2], [0.2, 0.8]), run([0, 1, 2], [0.6, 0.4])]);
    expect(pooled.density.map((p) => Number(p.toFixed(12)))).toEqual([0.4, 0.6]);
    // Standard deviation of 0.2 and 0.6 is 0.2828; the bands say that none of it is their own.
    expectWithin(pooled.between[0]!, Math.SQRT1_2 * 0.4, { rel: 1e-9 });
    // t of one degree of freedom at 95 % is 12.706 (common tables).
    expectWithin(pooled.high[0]! - 0.4, 12.706 * 0.2, { rel: 1e-4 });
    expect(pooled.low[0]).toBe(0);
  });

  it('takes the errors of each run out of the variance between them', () => {
    const half = 1.959964 * 0.1;
    const pooled = poolPdfs([run([0, 1, 2], [0.2, 0.8], half), run([0, 1, 2], [0.6, 0.4], half)]);
    expectWithin(pooled.between[0]!, Math.sqrt(0.08 - 0.01), { rel: 1e-6 });
    const noisy = poolPdfs([run([0, 1, 2], [0.2, 0.8], 1), run([0, 1, 2], [0.6, 0.4], 1)]);
    expect(noisy.between).toEqual([0, 0]);
  });

  it('one run keeps its own band and has nothing between runs', () => {
    const pooled = poolPdfs([run([0, 1, 3], [0.5, 0.25], 0.1)]);
    expect(pooled.between).toEqual([null, null]);
    expectWithin(pooled.high[0]!, 0.6, { rel: 1e-9 });
    expect(() => poolPdfs([])).toThrow(/at least one run/);
  });

  it('finds the scatter between simulated runs', () => {
    // 400 runs whose density in one bin scatters by 0.03 between runs and by 0.04 within.
    const random = createRandom(9);
    const runs = Array.from({ length: 400 }, () => {
      const p = 0.5 + 0.03 * random.normal() + 0.04 * random.normal();
      return run([0, 1, 2], [p, 1 - p], 1.959964 * 0.04);
    });
    expectWithin(poolPdfs(runs).between[0]!, 0.03, { abs: 0.006 });
  });
});

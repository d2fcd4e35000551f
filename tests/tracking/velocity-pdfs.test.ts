import { describe, expect, test } from 'vitest';
import { createRandom } from '@/tracking/random';
import type { Tracks } from '@/tracking/types';
import { sortedQuantile } from '@/tracking/quantile';
import { binOf, pdfEdges } from '@/tracking/velocity-pdfs/pdf-bins';
import { sampleSpread } from '@/tracking/velocity-pdfs/sample-spread';
import { velocityPdfs } from '@/tracking/velocity-pdfs/velocity-pdfs';
import { expectWithin } from '@/tests/helpers/expect-within';

const CONDITIONS = { pixelSize_m: 1e-5, frameInterval_s: 0.005, flowDirection: [1, 0] as [number, number] };
const RECIPE = { lagsFrames: [1, 4], bootstrapDraws: 300, seed: 3 };

/** Tracks of 21 points with velocities of their own: mean 2 mm/s along x, s.d. 1 and 0.5 mm/s. */
function straightTracks(count: number, seed: number): Tracks {
  const random = createRandom(seed);
  const points = 21;
  const n = count * points;
  const tracks: Tracks = {
    count,
    start: Uint32Array.from({ length: count + 1 }, (_, i) => i * points),
    frame: Uint32Array.from({ length: n }, (_, i) => i % points),
    xPx: new Float32Array(n),
    yPx: new Float32Array(n),
    sxPx: new Float32Array(n).fill(0.02),
    syPx: new Float32Array(n).fill(0.02),
    brightness: new Float32Array(n),
    flags: new Uint8Array(n),
  };
  for (let i = 0; i < count; i++) {
    const vx = (2e-3 + 1e-3 * random.normal()) * 500;
    const vy = 0.5e-3 * random.normal() * 500;
    for (let k = 0; k < points; k++) {
      tracks.xPx[i * points + k] = 100 + vx * k + 0.02 * random.normal();
      tracks.yPx[i * points + k] = 100 + vy * k + 0.02 * random.normal();
    }
  }
  return tracks;
}

const spreadOf = (values: Float64Array) =>
  sampleSpread((visit) => values.forEach((value) => visit(value)), values.length);

test('ends and quartiles are those of the sorted samples', () => {
  const random = createRandom(12);
  for (let n = 1; n <= 30; n++) {
    const values = Float64Array.from({ length: n }, () => random.normal());
    const sorted = values.slice().sort();
    expect(spreadOf(values)).toEqual({
      samples: n,
      least: sorted[0],
      lowerQuartile: sortedQuantile(sorted, 0.25),
      median: sortedQuantile(sorted, 0.5),
      upperQuartile: sortedQuantile(sorted, 0.75),
      most: sorted[n - 1],
      // A tenth of so few outside, rounded up.
      nearLeast: sorted[Math.ceil(n / 10) - 1],
      nearMost: sorted[n - Math.ceil(n / 10)],
    });
  }
});

describe('velocity distributions', () => {
  const tracks = straightTracks(300, 1);
  const population = Uint8Array.from({ length: 300 }, (_, i) => (i < 200 ? 0 : 1));
  const pdfs = velocityPdfs(tracks, population, CONDITIONS, RECIPE);

  test('there is one per population that has tracks, component and lag', () => {
    const names = pdfs.map((pdf) => `${pdf.population} ${pdf.component} ${pdf.lagFrames}`);
    const expected = [1, 4].flatMap((lag) =>
      ['x', 'y', 'along', 'across', 'speed'].flatMap((c) =>
        ['trapped', 'free', 'all'].map((population) => `${population} ${c} ${lag}`),
      ),
    );
    expect(names).toEqual(expected);
  });

  test('without a flow direction there is no along and across', () => {
    const bare = velocityPdfs(tracks, population, { ...CONDITIONS, flowDirection: null }, RECIPE);
    expect(new Set(bare.map((pdf) => pdf.component))).toEqual(new Set(['x', 'y', 'speed']));
  });

  test('the integral is 1, every sample is in a bin, all is the sum of the populations', () => {
    for (const pdf of pdfs) {
      const integral = pdf.density.reduce((sum, d, b) => sum + d * (pdf.edgesMS[b + 1] - pdf.edgesMS[b]), 0);
      expectWithin(integral, 1, { abs: 1e-12 });
      expect(pdf.count.reduce((a, b) => a + b)).toBe(pdf.samples);
      expect(pdf.samples).toBe(pdf.tracks * (21 - pdf.lagFrames));
      expect(pdf.edgesMS.every((edge, b) => b === 0 || edge > pdf.edgesMS[b - 1])).toBe(true);
    }
    const samples = (name: string) =>
      pdfs.find((p) => p.population === name && p.component === 'x')?.samples ?? 0;
    expect(samples('trapped') + samples('free')).toBe(samples('all'));
  });

  test('beside each histogram stands a kernel estimate that tells the same, its width set by tracks', () => {
    for (const { kernel, density, edgesMS, component } of pdfs) {
      if (!kernel) throw new Error('no kernel estimate');
      const { atMS } = kernel;
      const integral = atMS.reduce(
        (sum, v, k) => (k ? sum + 0.5 * (kernel.density[k] + kernel.density[k - 1]) * (v - atMS[k - 1]) : 0),
        0,
      );
      expectWithin(integral, 1, { abs: 1e-5 });
      if (component === 'speed') expect(atMS[0]).toBe(0);
      // Straight tracks are one sample each.
      expect(kernel.independent).toBeGreaterThanOrEqual(100);
      expect(kernel.independent).toBeLessThan(330);
      const peak = Math.max(...density);
      const highest = Math.max(...kernel.density);
      expect(highest).toBeGreaterThan(0.5 * peak);
      expect(highest).toBeLessThan(1.5 * peak);
      expect(kernel.toldFromMS).toBeGreaterThanOrEqual(edgesMS[0]);
      expect(kernel.toldToMS).toBeLessThanOrEqual(edgesMS.at(-1) ?? 0);
    }
  });

  test('mean, variance and noise are those the tracks were made with', () => {
    const all = pdfs.find((p) => p.population === 'all' && p.component === 'across' && p.lagFrames === 1);
    // 300 tracks: s.e. of the variance is sqrt(2/299) = 8 %; noise 2 sigma^2 / tau^2.
    const noise = (2 * (0.02 * 1e-5) ** 2) / 0.005 ** 2;
    expectWithin(all?.noiseVarianceM2S2 ?? 0, noise, { rel: 1e-5 });
    expectWithin((all?.varianceM2S2 ?? 0) - noise, 0.25e-6, { rel: 0.25 });
    const along = pdfs.find((p) => p.population === 'all' && p.component === 'along' && p.lagFrames === 4);
    expectWithin(along?.meanMS ?? 0, 2e-3, { abs: (3 * 1e-3) / Math.sqrt(300) });
  });

  test('bands count tracks, not samples: they hold the true density in 95 % of bins and repeats', () => {
    let inside = 0;
    let bins = 0;
    let narrow = 0;
    for (let seed = 1; seed <= 12; seed++) {
      const made = straightTracks(150, 100 + seed);
      const pdf = velocityPdfs(made, new Uint8Array(150), CONDITIONS, {
        ...RECIPE,
        lagsFrames: [4],
        seed,
      }).find((p) => p.population === 'all' && p.component === 'y');
      if (!pdf) throw new Error('no distribution');
      pdf.density.forEach((_, b) => {
        const truth = normalShare(pdf.edgesMS[b], pdf.edgesMS[b + 1], 0.5e-3);
        // Where fewer than 3 tracks are expected the percentile band is known to be too short.
        if (truth * 150 < 3) return;
        const density = truth / (pdf.edgesMS[b + 1] - pdf.edgesMS[b]);
        bins++;
        if (density >= (pdf.densityLow[b] ?? Infinity) && density <= (pdf.densityHigh[b] ?? 0)) inside++;
        const poisson = Math.sqrt(pdf.count[b]) / pdf.count[b];
        if ((pdf.densityHigh[b] ?? 0) - (pdf.densityLow[b] ?? 0) < 4 * poisson * pdf.density[b]) narrow++;
      });
    }
    expect(bins).toBeGreaterThan(80);
    expect(inside / bins).toBeGreaterThan(0.88);
    // A band from samples alone would be 4 times too narrow nearly everywhere.
    expect(narrow / bins).toBeLessThan(0.1);
  });

  test('the same seed gives the same bands', () => {
    expect(velocityPdfs(tracks, population, CONDITIONS, RECIPE)).toEqual(pdfs);
  });
});

/** Share of a centred Gaussian between two values, by Simpson's rule. */
function normalShare(low: number, high: number, sd: number): number {
  const f = (v: number) => Math.exp(-0.5 * (v / sd) ** 2) / (sd * Math.sqrt(2 * Math.PI));
  return ((high - low) / 6) * (f(low) + 4 * f((low + high) / 2) + f(high));
}

test('every sample lies in the bin that is found for it, also in long tails', () => {
  const random = createRandom(9);
  for (let round = 0; round < 50; round++) {
    const heavy = Float64Array.from(
      { length: 1 + random.integer(2000) },
      () => random.normal() / (random.uniform() + 1e-3),
    );
    const edges = pdfEdges(spreadOf(heavy), round % 2 ? 0.1 : 0);
    expect(edges.length).toBeLessThan(500);
    for (const value of heavy) {
      const b = binOf(edges, value);
      expect(edges[b] <= value && value < edges[b + 1]).toBe(true);
    }
  }
  expect(pdfEdges(spreadOf(Float64Array.of(2, 2, 2)), 0).length).toBeGreaterThan(1);
});

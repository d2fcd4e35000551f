import { expect, test, vi } from 'vitest';
import { estimatesJson } from '@/lib/tables/estimates-json';
import { reconnectionsCsv } from '@/lib/tables/reconnections-csv';
import { velocityPdfCsv } from '@/lib/tables/velocity-pdf-csv';
import { measureFlow } from '@/tracking/measure-flow';
import { RECIPE_DEFAULTS } from '@/tracking/recipe';
import { tangleScene } from '@/tracking/simulate/tangle-scene';
import { trueTracks } from '@/tracking/simulate/true-tracks';
import type { Conditions, Recipe, Tracks } from '@/tracking/types';
import { expectWithin } from '@/tests/helpers/expect-within';

// A whole recording is measured three times.
vi.setConfig({ testTimeout: 120_000 });

const IMAGE = { width: 320, height: 320, frames: 80 };
const RECIPE: Recipe = {
  ...RECIPE_DEFAULTS,
  lagsFrames: [1, 4],
  bootstrapDraws: 200,
  spotSizePx: 1,
  gain: 2,
  readNoise_e: 1.5,
  closestApproach_m: 4e-5,
};
const CONDITIONS: Conditions = {
  pixelSize_m: 1e-5,
  frameInterval_s: 0.005,
  sheetThickness_m: 2e-4,
  temperature_K: 1.85,
  heatFlux_W_m2: 675,
  flowDirection: [1, 0],
};
const scene = tangleScene({
  widthPx: 320,
  heightPx: 320,
  frames: 80,
  pixelSizeM: 1e-5,
  frameIntervalS: 0.005,
  sheetThicknessM: 2e-4,
  lineDensityM2: 1e7,
  beadsPerMetre: 5000,
  freeTracersPerFrame: 60,
  vnMPerS: 4e-3,
  tangleVelocityMPerS: -1e-3,
  events: 4,
  seed: 2,
});
const { tracks } = trueTracks(scene, { sigmaPx: 0.12, seed: 1, shortestTrackFrames: 3 });

test('measures populations, distributions, pairs and estimates, the same for the same seed', () => {
  const stages: string[] = [];
  const onProgress = (share: number, stage: string) => stages.push(`${share} ${stage}`);
  const measured = measureFlow(tracks, IMAGE, CONDITIONS, RECIPE, { onProgress });
  expect(stages[0]).toBe('0 populations');
  expect(stages.at(-1)).toBe('1 estimates');
  const { counts } = measured.populations;
  expect(counts.trapped + counts.free + counts.undecided).toBe(tracks.count);
  expect(measured.tracks.population.length).toBe(tracks.count);
  // A trapped track belongs to a line, and no other does.
  const changed = new Set(measured.details.changes.map(({ track }) => track));
  measured.tracks.line.forEach((line, i) => {
    if (!changed.has(i)) expect(line >= 0).toBe(measured.tracks.population[i] === 0);
  });
  expect(measured.pdfs.some((pdf) => pdf.population === 'trapped' && pdf.component === 'across')).toBe(true);
  const combined = measured.estimates.find((e) => e.method === 'combined' && e.quantity === 'line_density');
  expect(combined?.low).toBeLessThan(1e7);
  expect(combined?.high).toBeGreaterThan(1e7);

  expect(measureFlow(tracks, IMAGE, CONDITIONS, RECIPE)).toEqual(measured);
  // All but the arrays per track is kept as JSON.
  const { tracks: _arrays, ...plain } = measured;
  const stored = JSON.parse(JSON.stringify(plain)) as typeof plain;
  expect(stored).toEqual(plain);
  const bytes = (of: typeof plain) => [
    ...velocityPdfCsv(of.pdfs),
    ...reconnectionsCsv(of.candidates),
    estimatesJson(of.estimates),
  ];
  expect(bytes(stored)).toEqual(bytes(plain));
});

test('pixels twice as large double every speed', () => {
  const [one, two] = [1e-5, 2e-5].map((pixelSize_m) =>
    measureFlow(tracks, IMAGE, { ...CONDITIONS, pixelSize_m, heatFlux_W_m2: null }, RECIPE),
  );
  for (let i = 0; i < tracks.count; i++) {
    if (!Number.isNaN(one.tracks.meanVxMS[i])) {
      expectWithin(two.tracks.meanVxMS[i], 2 * one.tracks.meanVxMS[i], { rel: 1e-6 });
    }
  }
  const mean = (of: typeof one) =>
    of.pdfs.find((p) => p.population === 'all' && p.component === 'x')?.meanMS ?? 0;
  expectWithin(mean(two), 2 * mean(one), { rel: 1e-9 });
});

test('a recording without tracks has every table, empty, and every estimate, unknown', () => {
  const empty: Tracks = {
    count: 0,
    start: new Uint32Array(1),
    frame: new Uint32Array(0),
    xPx: new Float32Array(0),
    yPx: new Float32Array(0),
    sxPx: new Float32Array(0),
    syPx: new Float32Array(0),
    brightness: new Float32Array(0),
    flags: new Uint8Array(0),
  };
  const measured = measureFlow(empty, IMAGE, { pixelSize_m: 1e-5, frameInterval_s: 0.005 }, RECIPE);
  expect(measured.pdfs).toEqual([]);
  expect(measured.candidates).toEqual([]);
  // Ten methods, density and spacing of each.
  expect(measured.estimates.length).toBe(20);
  for (const estimate of measured.estimates) {
    expect(estimate.value).toBeNull();
    expect(estimate.note).toMatch(/\.$/);
  }
});

test('tracks without position errors are measured, but no pair is fitted to them', () => {
  const blind = {
    ...tracks,
    sxPx: tracks.sxPx.map(() => Number.NaN),
    syPx: tracks.syPx.map(() => Number.NaN),
  };
  const measured = measureFlow(blind, IMAGE, CONDITIONS, RECIPE);
  expect(measured.pairs.tested).toBe(0);
  expect(measured.pdfs.every((pdf) => pdf.noiseVarianceM2S2 === null)).toBe(true);
  for (const { value, low, high } of measured.estimates) {
    for (const number of [value, low, high]) expect(number === null || Number.isFinite(number)).toBe(true);
  }
});

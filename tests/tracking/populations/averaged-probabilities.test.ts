import { expect, test } from 'vitest';
import { averagedProbabilities } from '@/tracking/populations/averaged-probabilities';
import { fitGroups } from '@/tracking/populations/fit-groups';
import type { Component, MixtureData } from '@/tracking/populations/component';
import { responsibilities } from '@/tracking/populations/gaussian-mixture';
import { createRandom } from '@/tracking/random';

const DIMS = 4;

/** Two round clouds, three widths apart in the first value; a third of the rows belong to the lower one. */
function clouds(rows: number, seed: number) {
  const random = createRandom(seed);
  const lower = Array.from({ length: rows }, () => random.uniform() < 1 / 3);
  const data: MixtureData = {
    n: rows,
    dims: DIMS,
    value: Float64Array.from({ length: DIMS * rows }, (_, e) =>
      e % DIMS === 0 && lower[Math.floor(e / DIMS)] ? random.normal() - 3 : random.normal(),
    ),
    variance: new Float64Array(DIMS * rows).fill(0.01),
    coordinate: Float64Array.from({ length: rows }, () => 2 * random.uniform() - 1),
  };
  return { data, lower };
}

const lowerOf = ([a, b]: readonly Component[]) => (a.beta[0] < b.beta[0] ? 0 : 1);

/** Both kinds of probabilities of the lower cloud. */
function judged(rows: number, seed: number) {
  const { data, lower } = clouds(rows, seed);
  const fit = fitGroups(data, 2, seed);
  if (!fit) throw new Error('No mixture was found.');
  const of = lowerOf(fit.components);
  const pick = (q: Float64Array) => Float64Array.from({ length: rows }, (_, i) => q[2 * i + of]);
  return {
    lower,
    best: pick(responsibilities(data, fit.components).responsibilities),
    averaged: pick(averagedProbabilities(data, fit.components, seed)),
    again: pick(averagedProbabilities(data, fit.components, seed)),
  };
}

const mean = (values: Float64Array) => values.reduce((a, b) => a + b, 0) / values.length;

test('probabilities of few tracks are less sure, and come nearer to the truth by the logarithmic score', () => {
  let gained = 0;
  let better = 0;
  for (let seed = 1; seed <= 5; seed++) {
    const { lower, best, averaged, again } = judged(120, seed);
    expect(again).toEqual(averaged);
    expect(averaged.every((p) => p >= 0 && p <= 1)).toBe(true);
    expect(mean(averaged.map((p) => p * (1 - p)))).toBeGreaterThan(mean(best.map((p) => p * (1 - p))));
    // ln of the probability of what is true: a proper score (Good, J. R. Stat. Soc. B 14, 107, 1952).
    const score = (p: Float64Array) =>
      lower.reduce((sum, is, i) => sum + Math.log(Math.max(1e-12, is ? p[i] : 1 - p[i])), 0);
    const gain = score(averaged) - score(best);
    gained += gain;
    if (gain > 0) better++;
  }
  expect(gained).toBeGreaterThan(0);
  expect(better).toBeGreaterThanOrEqual(4);
});

test('probabilities of many tracks are those of the best mixture', () => {
  const { best, averaged } = judged(1000, 3);
  const off = Float64Array.from(best, (p, i) => Math.abs(p - averaged[i]));
  expect(mean(off)).toBeLessThan(0.015);
});

import { describe, expect, test } from 'vitest';
import { falseSpots, keepsFalseRate, FALSE_RATE_FACTOR } from '@/tracking/studies/false-spots';
import { NOISE_KINDS } from '@/tracking/studies/noise-kinds';

const kindOf = (name: string) => NOISE_KINDS.find(({ kind }) => kind === name)!;

describe('where there is nothing, detection finds as many spots as were wanted, within a factor of 1.5', () => {
  // 300 spots tell the rate to 6 %; camera and background are measured from the noise itself.
  test.each([
    ['even light, 5 electrons', 10],
    ['drifting sheet', 10],
    ['read noise only', 10],
    ['small spots', 10],
  ])('%s: %d a frame', (name, wanted) => {
    const row = falseSpots(kindOf(name), wanted, { spotsLeast: 300, seed: 11, effort: 'quick' });
    expect(row.count).toBeGreaterThan(250);
    expect(row.measured).toBeLessThan(FALSE_RATE_FACTOR * wanted);
    expect(row.measured).toBeGreaterThan(wanted / FALSE_RATE_FACTOR);
  });
});

test('a rate is kept up to the factor, either way', () => {
  const row = { kind: 'any', wanted: 2, count: 300, frames: 100 };
  expect(keepsFalseRate({ ...row, measured: 2.9 })).toBe(true);
  expect(keepsFalseRate({ ...row, measured: 1.4 })).toBe(true);
  expect(keepsFalseRate({ ...row, measured: 3.1 })).toBe(false);
  expect(keepsFalseRate({ ...row, measured: 1.3 })).toBe(false);
});

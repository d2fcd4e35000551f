import { describe, expect, it } from 'vitest';
import { poissonInterval } from '@/tracking/poisson-interval';
import { expectWithin } from '@/tests/helpers/expect-within';

describe('events of a Poisson process', () => {
  // Garwood (1936), as in common tables of exact 95 % limits.
  it.each([
    [0, 0, 3.6889],
    [1, 0.0253, 5.5716],
    [5, 1.6235, 11.6683],
    [10, 4.7954, 18.3904],
    [100, 81.3636, 121.6273],
  ])('%i seen: %f to %f', (count, low, high) => {
    // prettier-ignore
    const interval = poissonInterval(count);
    expectWithin(interval.low, low, { abs: 1e-3 });
    expectWithin(interval.high, high, { abs: 1e-3 });
  });
  it('refuses what is no count', () => {
    expect(() => poissonInterval(-1)).toThrow(/whole number/);
  });

  // The exact interval and what takes over beyond 500 must meet.
  it('goes on beyond what can be summed', () => {
    const [exact, beyond] = [poissonInterval(500), poissonInterval(501)];
    expectWithin(beyond.low - exact.low, 1, { abs: 0.1 });
    expectWithin(beyond.high - exact.high, 1, { abs: 0.1 });
  });
});

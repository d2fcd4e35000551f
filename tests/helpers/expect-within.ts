import { expect } from 'vitest';

/** Passes when `value` lies within an absolute or a relative tolerance of `expected`. */
export function expectWithin(
  value: number,
  expected: number,
  tolerance: { abs: number } | { rel: number },
): void {
  const allowed = 'abs' in tolerance ? tolerance.abs : tolerance.rel * Math.abs(expected);
  const off = Math.abs(value - expected);
  expect(off <= allowed, `got ${value}, expected ${expected} +- ${allowed}, off by ${off}`).toBe(true);
}

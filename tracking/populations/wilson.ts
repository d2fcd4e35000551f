import { Z95 } from '../normal-tail';

/** Wilson's interval of a proportion (Wilson 1927), level 0.95. NaN without trials. */
export function wilsonInterval(successes: number, trials: number): { low: number; high: number } {
  const z2 = Z95 * Z95;
  const p = successes / trials;
  const middle = (p + z2 / (2 * trials)) / (1 + z2 / trials);
  const half = (Z95 / (1 + z2 / trials)) * Math.sqrt((p * (1 - p)) / trials + z2 / (4 * trials * trials));
  return { low: Math.max(0, middle - half), high: Math.min(1, middle + half) };
}

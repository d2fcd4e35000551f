import { Z95 } from './normal-tail';

const HALVINGS = 80;
/** Beyond this the exact sum underflows; there the square root is normal to three digits. */
const EXACT_MOST = 500;
/** Probability beyond either end. */
const TAIL = 0.025;

/** Probability of at most `count` where `mean` are expected. */
function poissonUpTo(count: number, mean: number): number {
  let term = Math.exp(-mean);
  let sum = term;
  for (let k = 1; k <= count; k++) sum += term *= mean / k;
  return sum;
}

/**
 * Exact two-sided 95 % interval of the mean of a Poisson process of which `count` events were seen
 * (Garwood, Biometrika 28, 437, 1936), by bisection.
 *
 * @throws RangeError unless the count is a whole number >= 0.
 */
export function poissonInterval(count: number): { low: number; high: number } {
  if (!(Number.isInteger(count) && count >= 0)) {
    throw new RangeError(`count must be a whole number >= 0. Received ${count}.`);
  }
  if (count > EXACT_MOST) {
    return { low: (Math.sqrt(count) - Z95 / 2) ** 2, high: (Math.sqrt(count + 1) + Z95 / 2) ** 2 };
  }
  const root = (from: number, to: number, above: (mean: number) => boolean) => {
    let [a, b] = [from, to];
    for (let i = 0; i < HALVINGS; i++) {
      const middle = (a + b) / 2;
      if (above(middle)) b = middle;
      else a = middle;
    }
    return (a + b) / 2;
  };
  const far = count + 12 * Math.sqrt(count + 1) + 12;
  return {
    low: count === 0 ? 0 : root(0, count, (mean) => 1 - poissonUpTo(count - 1, mean) > TAIL),
    high: root(count, far, (mean) => poissonUpTo(count, mean) < TAIL),
  };
}

const HALVINGS = 80;

/** Probability of at most `count` where `mean` are expected. */
function poissonUpTo(count: number, mean: number): number {
  let term = Math.exp(-mean);
  let sum = term;
  for (let k = 1; k <= count; k++) sum += term *= mean / k;
  return sum;
}

/**
 * Exact two-sided interval of the mean of a Poisson process of which `count` events were seen
 * (Garwood, Biometrika 28, 437, 1936), by bisection.
 *
 * @param count whole, 0 to 500; @param level coverage, as 0.95.
 * @throws RangeError for a count outside of that.
 */
export function poissonInterval(count: number, level: number): { low: number; high: number } {
  if (!(Number.isInteger(count) && count >= 0)) {
    throw new RangeError(`count must be a whole number >= 0. Received ${count}.`);
  }
  // Beyond 500 the exact sum underflows; there the square root is normal to three digits.
  if (count > 500) {
    const z = 1.959964;
    return { low: (Math.sqrt(count) - z / 2) ** 2, high: (Math.sqrt(count + 1) + z / 2) ** 2 };
  }
  const tail = (1 - level) / 2;
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
    low: count === 0 ? 0 : root(0, count, (mean) => 1 - poissonUpTo(count - 1, mean) > tail),
    high: root(count, far, (mean) => poissonUpTo(count, mean) < tail),
  };
}

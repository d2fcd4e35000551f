/** Values further out than this many deviations are left out: tracers that moved, not noise. */
const CLIP = 3;
/** Standard deviation of a normal variable cut at +-3: sqrt(1 - 2 * 3 * phi(3) / (2 * Phi(3) - 1)). */
const CLIPPED_NORMAL = 0.986578;
const STEPS_MAX = 20;

/** Half the distance between the 15.87 % and 84.13 % points: the deviation of a normal variable. */
function rankDeviation(values: Float32Array): { centre: number; deviation: number } {
  const sorted = values.slice().sort();
  const at = (share: number) => sorted[Math.round(share * (sorted.length - 1))]!;
  return { centre: at(0.5), deviation: (at(0.8413) - at(0.1587)) / 2 };
}

function within(values: Float32Array, centre: number, reach: number): { mean: number; deviation: number } {
  let [n, sum, squares] = [0, 0, 0];
  for (const value of values) {
    const off = value - centre;
    if (Math.abs(off) > reach) continue;
    n++;
    sum += off;
    squares += off * off;
  }
  if (n === 0) return { mean: centre, deviation: 0 };
  const shift = sum / n;
  return { mean: centre + shift, deviation: Math.sqrt(Math.max(0, squares / n - shift * shift)) };
}

/**
 * Standard deviation of values that are normal but for a few outliers: values beyond 3 deviations are
 * left out until that changes nothing, and the loss of the tails is made good. Works for whole-number
 * counts whose deviation is a count or less, where ranks alone are too coarse.
 * @param values at least one, finite
 * @returns >= 0, in the unit of the values.
 */
export function clippedDeviation(values: Float32Array): number {
  let { centre, deviation } = rankDeviation(values);
  // Ranks of whole numbers can say 0 where the noise is a fraction of a count.
  if (deviation === 0) ({ mean: centre, deviation } = within(values, centre, Infinity));
  for (let step = 0; step < STEPS_MAX && deviation > 0; step++) {
    const next = within(values, centre, CLIP * deviation);
    const corrected = next.deviation / CLIPPED_NORMAL;
    const settled = Math.abs(corrected - deviation) <= 1e-6 * deviation;
    centre = next.mean;
    deviation = corrected;
    if (settled) break;
  }
  return deviation;
}

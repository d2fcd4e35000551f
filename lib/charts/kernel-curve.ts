/** A density as a curve that is straight between its places, SI. */
export interface KernelCurve {
  at_m_s: readonly number[];
  density_s_m: readonly number[];
  /** Beyond these it rests on few samples. */
  toldFrom_m_s: number;
  toldTo_m_s: number;
}

const MM_S_PER_M_S = 1000;

/** Points of the curve where it rests on more than a few samples, mm/s and s/mm. */
export function kernelPoints(curve: KernelCurve): { x: number; y: number }[] {
  const { at_m_s, toldFrom_m_s, toldTo_m_s } = curve;
  const within = at_m_s.filter((at) => at > toldFrom_m_s && at < toldTo_m_s);
  return [toldFrom_m_s, ...within, toldTo_m_s].map((at) => ({
    x: at * MM_S_PER_M_S,
    y: densityAt(curve, at) / MM_S_PER_M_S,
  }));
}

/** Mean of the curve over a bin, s/m: what a histogram of it would show. 0 outside of the curve. */
export function meanOverBin(curve: KernelCurve, low_m_s: number, high_m_s: number): number {
  const { at_m_s } = curve;
  const from = Math.max(low_m_s, at_m_s[0]);
  const to = Math.min(high_m_s, at_m_s[at_m_s.length - 1]);
  if (!(to > from)) return 0;
  const places = [from, ...at_m_s.filter((at) => at > from && at < to), to];
  let sum = 0;
  for (let k = 1; k < places.length; k++) {
    const [a, b] = [places[k - 1], places[k]];
    sum += 0.5 * (densityAt(curve, a) + densityAt(curve, b)) * (b - a);
  }
  return sum / (high_m_s - low_m_s);
}

function densityAt({ at_m_s, density_s_m }: KernelCurve, value: number): number {
  const last = at_m_s.length - 1;
  if (value < at_m_s[0] || value > at_m_s[last]) return 0;
  let low = 0;
  let high = last;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (at_m_s[middle] <= value) low = middle;
    else high = middle;
  }
  const share = (value - at_m_s[low]) / (at_m_s[high] - at_m_s[low]);
  return density_s_m[low] + share * (density_s_m[high] - density_s_m[low]);
}

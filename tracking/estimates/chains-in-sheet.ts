/** Steps of the quadratures below; the integrands are smooth. */
const STEPS = 400;
/** Bounds of tracers per thickness that are looked through: far beyond what can be counted. */
const RANGE = [1e-4, 1e3] as const;

/** What the chains of tracers in a sheet show of isotropic straight lines: those with two tracers or more. */
export interface ChainsInSheet {
  /** Share of the projected length of all lines that lies between the outermost tracers of a line. */
  shareBetween: number;
  /** Tracers on chains per projected length of chain, times the thickness of the sheet. */
  tracersPerThickness: number;
}

/**
 * On a piece of line of length s, tracers come as a Poisson process of rate r: with n = r s, n (1 - exp(-n)) of them
 * stand in twos or more on average, and s (1 + exp(-n)) - 2 (1 - exp(-n)) / r lies between the outermost. Lines cross
 * a sheet in proportion to c, the cosine of their angle to its normal, and run h / c in it, of which
 * sqrt(1 - c^2) shows in projection.
 *
 * @param perThickness tracers per line length times thickness, r h.
 */
export function chainsInSheet(perThickness: number): ChainsInSheet {
  let [between, length, tracers] = [0, 0, 0];
  for (let i = 0; i < STEPS; i++) {
    // c = sin(a) makes the integrands smooth where lines lie in the sheet.
    const a = ((i + 0.5) / STEPS) * (Math.PI / 2);
    const [c, across] = [Math.sin(a), Math.cos(a)];
    const n = perThickness / c;
    // The difference of nearly equal numbers: its series.
    const share = n < 1e-2 ? (n * n) / 6 : 1 + Math.exp(-n) + (2 * Math.expm1(-n)) / n;
    between += across * across * share;
    length += across * across;
    tracers += across * -Math.expm1(-n);
  }
  return { shareBetween: between / length, tracersPerThickness: (perThickness * tracers) / between };
}

/**
 * Tracers per line length times thickness that chains with so many tracers per projected length times thickness
 * tell of; the inverse of `chainsInSheet`, which rises throughout.
 */
export function perThicknessOf(tracersPerThickness: number): number {
  let [low, high]: [number, number] = [...RANGE];
  while (high / low > 1 + 1e-9) {
    const middle = Math.sqrt(low * high);
    if (chainsInSheet(middle).tracersPerThickness < tracersPerThickness) low = middle;
    else high = middle;
  }
  return Math.sqrt(low * high);
}

/** Chords that stand for all; sums over so many points of a low-discrepancy sequence are right to some 0.1 %. */
const CHORDS = 1 << 14;
/** Bounds of tracers per chord of mean length that are looked through: far beyond what can be counted. */
const RANGE = [1e-4, 1e3] as const;

/** Pieces of isotropic straight lines within what is filmed, each standing for as much length as the others. */
export interface Chords {
  /** Length of the piece, m. */
  lengthM: Float64Array;
  /** Sine of its angle to the normal of the sheet: the part of it that shows in projection. */
  across: Float64Array;
}

/** What chains of tracers show of the lines: those pieces with two tracers or more. */
export interface ChainsInSheet {
  /** Share of the projected length of all lines that lies between the outermost tracers of a piece. */
  shareBetween: number;
  /** Tracers on chains per projected length of chain, m^-1. */
  tracersPerLengthM: number;
}

/**
 * Pieces into which the sheet and the edges of the image cut lines: chords of a box through points that fill it
 * evenly, in directions that fill the sphere evenly, so that long ones come in proportion to their length.
 */
export function chordsOfBox(widthM: number, heightM: number, thicknessM: number): Chords {
  const chords = { lengthM: new Float64Array(CHORDS), across: new Float64Array(CHORDS) };
  const size = [widthM, heightM, thicknessM];
  for (let i = 0; i < CHORDS; i++) {
    const at = evenly(i);
    const cos = 2 * at[3] - 1;
    const sin = Math.sqrt(1 - cos * cos);
    const direction = [sin * Math.cos(2 * Math.PI * at[4]), sin * Math.sin(2 * Math.PI * at[4]), cos];
    let [back, on] = [Infinity, Infinity];
    for (let axis = 0; axis < 3; axis++) {
      const step = Math.abs(direction[axis]);
      const ahead = direction[axis] > 0 ? 1 - at[axis] : at[axis];
      on = Math.min(on, (size[axis] * ahead) / step);
      back = Math.min(back, (size[axis] * (1 - ahead)) / step);
    }
    chords.lengthM[i] = back + on;
    chords.across[i] = sin;
  }
  return chords;
}

/** Root of x^6 = x + 1, whose powers make the sequence of least discrepancy known in 5 dimensions (Roberts 2018, from memory). */
const ROOT = 1.1347241384015194;
const STEPS = [1, 2, 3, 4, 5].map((power) => ROOT ** -power);
const evenly = (i: number): number[] => STEPS.map((step) => (0.5 + (i + 1) * step) % 1);

/**
 * On a piece of line of length s, tracers come as a Poisson process of rate r. The outermost of two or more are t
 * apart with density r^2 (s - t) exp(-r (s - t)), since none lies beyond them, and r t lie between them on average.
 *
 * @param perLengthM tracers per line length, r.
 * @param shortestM chains that show shorter in projection are not counted, neither their length nor their tracers.
 */
export function chainsInSheet(
  { lengthM, across }: Chords,
  perLengthM: number,
  shortestM: number,
): ChainsInSheet {
  let [between, length, tracers] = [0, 0, 0];
  for (let i = 0; i < lengthM.length; i++) {
    length += across[i];
    const n = perLengthM * lengthM[i];
    // Integrals over what lies beyond the outermost, up to m.
    const m = n - (perLengthM * shortestM) / across[i];
    if (!(m > 0)) continue;
    const [first, second] = beyond(m);
    between += (across[i] * (n * first - second)) / n;
    tracers += ((2 + n) * first - second) / n;
  }
  return { shareBetween: between / length, tracersPerLengthM: (perLengthM * tracers) / between };
}

/** Integrals of u exp(-u) and of u^2 exp(-u) from 0 to m; by their series where they are differences of nearly equal numbers. */
function beyond(m: number): [number, number] {
  if (m < 1e-2) return [m * m * (1 / 2 - m / 3), m ** 3 * (1 / 3 - m / 4)];
  const tail = Math.exp(-m);
  return [1 - tail * (1 + m), 2 - tail * (m * m + 2 * m + 2)];
}

/** Tracers per line length that chains with so many tracers per projected length tell of; the inverse of `chainsInSheet`, which rises throughout. */
export function perLengthOf(chords: Chords, tracersPerLengthM: number, shortestM: number): number {
  const meanM = chords.lengthM.reduce((a, b) => a + b, 0) / chords.lengthM.length;
  let [low, high] = RANGE.map((perChord) => perChord / meanM);
  while (high / low > 1 + 1e-6) {
    const middle = Math.sqrt(low * high);
    if (chainsInSheet(chords, middle, shortestM).tracersPerLengthM < tracersPerLengthM) low = middle;
    else high = middle;
  }
  return Math.sqrt(low * high);
}

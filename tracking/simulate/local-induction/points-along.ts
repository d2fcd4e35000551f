import { chords, type Filament } from './filament';

/** Points of a filament by the share of its length, counted from its first point. */
export interface FilamentRuler {
  lengthM: number;
  /** Writes x, y, z of the place a share (0 to 1) along. */
  placeAt(share: number, out: Float64Array): void;
}

/**
 * Measures along a filament. Between points the line is the cubic that passes through them with the
 * directions of their neighbours (Catmull & Rom 1974), whose error falls as the cube of the distance.
 */
export function filamentRuler(filament: Filament): FilamentRuler {
  const { xyzM, periodM } = filament;
  const { xyzM: chord, lengthM } = chords(filament);
  const n = lengthM.length;
  const upTo = new Float64Array(n + 1);
  for (let i = 0; i < n; i++) upTo[i + 1] = upTo[i] + lengthM[i];
  const whole = upTo[n];
  const tangent = (i: number, a: number): number => {
    const before = i === 0 ? n - 1 : i - 1;
    return (
      ((chord[3 * before + a] * lengthM[i]) / lengthM[before] +
        (chord[3 * i + a] * lengthM[before]) / lengthM[i]) /
      (lengthM[before] + lengthM[i])
    );
  };
  const placeAt = (share: number, out: Float64Array): void => {
    const s = Math.min(Math.max(share, 0), 1) * whole;
    let low = 0;
    let high = n;
    while (high - low > 1) {
      const middle = (low + high) >> 1;
      if (upTo[middle] <= s) low = middle;
      else high = middle;
    }
    const next = low + 1 < n ? low + 1 : 0;
    const h = lengthM[low];
    const u = (s - upTo[low]) / h;
    for (let a = 0; a < 3; a++) {
      const from = xyzM[3 * low + a];
      const to = xyzM[3 * next + a] + (next === 0 ? periodM[a] : 0);
      out[a] =
        from * (1 + u * u * (2 * u - 3)) +
        to * u * u * (3 - 2 * u) +
        h * (tangent(low, a) * u * (1 - u) * (1 - u) - tangent(next, a) * u * u * (1 - u));
    }
  };
  return { lengthM: whole, placeAt };
}

/**
 * The same line by points at equal distances, its first point kept: points that have drifted together
 * would ask for tiny steps, and those that have drifted apart would miss the curvature between them
 * (Schwarz, Phys. Rev. B 38, 2398 (1988)).
 */
export function respacedFilament(filament: Filament, spacingM: number): Filament {
  const ruler = filamentRuler(filament);
  const n = Math.max(4, Math.round(ruler.lengthM / spacingM));
  const xyzM = new Float64Array(3 * n);
  const at = new Float64Array(3);
  for (let i = 0; i < n; i++) {
    ruler.placeAt(i / n, at);
    xyzM.set(at, 3 * i);
  }
  return { xyzM, periodM: filament.periodM };
}

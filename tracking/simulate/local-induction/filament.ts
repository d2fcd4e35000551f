import { CORE_RADIUS_M, KAPPA_M2_S } from '../../units';

/**
 * A vortex line as points in order of s', the direction of its vorticity. The point after the last is the
 * first one moved by `periodM`: 0 for a closed loop, a vector of the periodic box for a line that runs
 * through it for ever.
 */
export interface Filament {
  /** Length 3n, n >= 4: x0, y0, z0, x1, ...; not folded back into the box. */
  xyzM: Float64Array;
  periodM: readonly [number, number, number];
}

/** beta = (kappa / 4 pi) ln(R / a0): what curvature is multiplied with, m^2/s, R a length such as the radius of curvature or the spacing. */
export function inductionBeta(lengthM: number, coreM = CORE_RADIUS_M): number {
  return (KAPPA_M2_S / (4 * Math.PI)) * Math.log(lengthM / coreM);
}

/** Chords from every point to the next, 3n numbers, and their lengths, n numbers. */
export function chords({ xyzM, periodM }: Filament): { xyzM: Float64Array; lengthM: Float64Array } {
  const n = xyzM.length / 3;
  const out = new Float64Array(3 * n);
  const lengthM = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    const next = i + 1 < n ? 3 * (i + 1) : 0;
    for (let a = 0; a < 3; a++)
      out[3 * i + a] = xyzM[next + a] + (next === 0 ? periodM[a] : 0) - xyzM[3 * i + a];
    lengthM[i] = Math.hypot(out[3 * i], out[3 * i + 1], out[3 * i + 2]);
  }
  return { xyzM: out, lengthM };
}

/** Length of a filament from a point to its image a period on, m. */
export function filamentLength(filament: Filament): number {
  return chords(filament).lengthM.reduce((a, b) => a + b, 0);
}

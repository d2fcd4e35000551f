import { chords, type Filament } from './filament';

/** Beyond this part of the largest stable step of the explicit scheme motion on the scale of points is damped or grows. */
const SAFE_PART = 0.7;
/** Largest imaginary eigenvalue times step for which the classical Runge-Kutta scheme is stable. */
const STABLE = 2 * Math.SQRT2;

export interface InductionLaw {
  /** m^2/s; see `inductionBeta`. */
  betaM2S: number;
  /** Mutual friction against a normal fluid at rest, alpha of the table of He II; default 0. */
  alpha?: number;
}

/**
 * Velocity of every point under local induction: beta s' x s'' (Da Rios 1906; Schwarz, Phys. Rev. B 31,
 * 5782 (1985)), with mutual friction - alpha s' x (beta s' x s'') against a normal fluid at rest.
 * Derivatives by arc length are those of the parabola through a point and its neighbours.
 *
 * @returns 3n numbers, m/s.
 */
export function inductionVelocity(filament: Filament, { betaM2S, alpha = 0 }: InductionLaw): Float64Array {
  const { xyzM: chord, lengthM } = chords(filament);
  const n = lengthM.length;
  const out = new Float64Array(3 * n);
  for (let i = 0; i < n; i++) {
    const before = i === 0 ? n - 1 : i - 1;
    const lb = lengthM[before];
    const la = lengthM[i];
    // Weights of the chords before and after in the first and the second derivative.
    const fb = la / (lb * (la + lb));
    const fa = lb / (la * (la + lb));
    const sb = -2 / (lb * (la + lb));
    const sa = 2 / (la * (la + lb));
    const [p, q] = [3 * before, 3 * i];
    const tx = fb * chord[p] + fa * chord[q];
    const ty = fb * chord[p + 1] + fa * chord[q + 1];
    const tz = fb * chord[p + 2] + fa * chord[q + 2];
    const cx = sb * chord[p] + sa * chord[q];
    const cy = sb * chord[p + 1] + sa * chord[q + 1];
    const cz = sb * chord[p + 2] + sa * chord[q + 2];
    const vx = betaM2S * (ty * cz - tz * cy);
    const vy = betaM2S * (tz * cx - tx * cz);
    const vz = betaM2S * (tx * cy - ty * cx);
    out[3 * i] = vx - alpha * (ty * vz - tz * vy);
    out[3 * i + 1] = vy - alpha * (tz * vx - tx * vz);
    out[3 * i + 2] = vz - alpha * (tx * vy - ty * vx);
  }
  return out;
}

/** Largest step that is stable for points a distance apart, s: waves between points turn at 4 beta / distance^2. */
export function stableStep(spacingM: number, betaM2S: number): number {
  return (SAFE_PART * STABLE * spacingM * spacingM) / (4 * betaM2S);
}

/** The filament after a time, by classical Runge-Kutta steps no longer than are stable. */
export function advanceFilament(filament: Filament, law: InductionLaw, durationS: number): Filament {
  const { periodM } = filament;
  let xyzM = Float64Array.from(filament.xyzM);
  const moved = (by: Float64Array, t: number) => ({ periodM, xyzM: xyzM.map((x, k) => x + t * by[k]) });
  let left = durationS;
  while (left > 0) {
    const shortest = chords({ xyzM, periodM }).lengthM.reduce((a, b) => Math.min(a, b), Infinity);
    // Steps of equal length to the end: none of them is a sliver.
    const dt = left / Math.max(1, Math.ceil(left / stableStep(shortest, law.betaM2S)));
    const k1 = inductionVelocity({ xyzM, periodM }, law);
    const k2 = inductionVelocity(moved(k1, dt / 2), law);
    const k3 = inductionVelocity(moved(k2, dt / 2), law);
    const k4 = inductionVelocity(moved(k3, dt), law);
    xyzM = xyzM.map((x, k) => x + (dt / 6) * (k1[k] + 2 * (k2[k] + k3[k]) + k4[k]));
    left = dt < left ? left - dt : 0;
  }
  return { xyzM, periodM };
}

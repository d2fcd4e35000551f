import { KAPPA_M2_S } from '../units';

/** Separation of two lines a time from their meeting, m: delta = A sqrt(kappa |t - t0|) (Paoletti, Fisher & Lathrop, Physica D 239, 1367 (2010)). */
export function separationAfter(amplitude: number, sinceS: number): number {
  return amplitude * Math.sqrt(KAPPA_M2_S * Math.abs(sinceS));
}

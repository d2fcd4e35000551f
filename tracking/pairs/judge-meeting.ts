import type { SideFit } from './candidate';
import { freeExponent } from './free-exponent';
import type { MeetingFit } from './meeting-fit';
import { seenSide, type Separation } from './separation';

/** Bounds of the amplitude of the law, wider than all published values. */
export const AMPLITUDE = { low: 0.2, high: 6 } as const;
export const REDUCED_CHI2_MAX = 2;
/** The law must better the fly-by by this much. */
export const BIC_GAIN_MIN = 10;

/** Amplitudes before and after; null for a side that was not seen. */
function amplitudes(s: Separation, fit: MeetingFit): { before: number | null; after: number | null } {
  const seen = seenSide(s);
  return {
    before: seen === 'after' ? null : Math.sqrt(fit.law.coefficients[2]),
    after: seen === 'before' ? null : Math.sqrt(fit.law.coefficients[1]),
  };
}

const within = (amplitude: number | null) =>
  amplitude === null || (amplitude >= AMPLITUDE.low && amplitude <= AMPLITUDE.high);

/** With fewer points a side's exponent is shown but rejects nothing. */
const EXPONENT_GATE_POINTS = 10;
/** Standard errors of a 95 % interval. */
const Z95 = 1.96;
/** Drift of the lines and projection bend an ideal 1/2 by about this much (common practice, no source). */
const EXPONENT_SYSTEMATIC = 0.05;

/** Fits of both sides; null for a side that was not seen. */
export function sidesOf(s: Separation, fit: MeetingFit): { before: SideFit | null; after: SideFit | null } {
  const seen = seenSide(s);
  return {
    before: seen === 'after' ? null : sideFit(s, fit, -1),
    after: seen === 'before' ? null : sideFit(s, fit, 1),
  };
}

function sideFit(s: Separation, fit: MeetingFit, side: -1 | 1): SideFit {
  const column = side === 1 ? 1 : 2;
  const amplitude = Math.sqrt(fit.law.coefficients[column]);
  const exponent = freeExponent(s, fit, side);
  return {
    points: s.since.reduce((n, since) => n + (side * (since - fit.law.t0) > 0 ? 1 : 0), 0),
    amplitude,
    amplitudeError: amplitude > 0 ? fit.law.errors[column] / (2 * amplitude) : 0,
    exponent: exponent?.value ?? null,
    exponentError: exponent?.error ?? null,
  };
}

/** What the law itself fails, in plain sentences. */
export function failedByLaw(s: Separation, fit: MeetingFit): string[] {
  const failed: string[] = [];
  const { before, after } = amplitudes(s, fit);
  if (!(fit.reducedChi2 < REDUCED_CHI2_MAX)) {
    failed.push(
      `The square-root law misses the points: chi-square ${fit.reducedChi2.toPrecision(3)} per degree of freedom.`,
    );
  }
  if (!within(before) || !within(after)) {
    failed.push(`An amplitude is outside ${AMPLITUDE.low} to ${AMPLITUDE.high}.`);
  }
  return failed;
}

/** Sides whose exponent is measured and not 1/2. */
export function failedByExponent(sides: { before: SideFit | null; after: SideFit | null }): string[] {
  const isOff = (side: SideFit | null) =>
    side !== null &&
    side.points >= EXPONENT_GATE_POINTS &&
    side.exponent !== null &&
    side.exponentError !== null &&
    Math.abs(side.exponent - 0.5) > Math.hypot(Z95 * side.exponentError, EXPONENT_SYSTEMATIC);
  const failed: string[] = [];
  if (isOff(sides.before)) failed.push('The exponent before the meeting is not 1/2.');
  if (isOff(sides.after)) failed.push('The exponent after the meeting is not 1/2.');
  return failed;
}

/**
 * How much an event speaks for the law: the gain over a fly-by, or -Infinity where the law doesn't
 * hold or an exponent is not 1/2. Observed and chance meetings are ranked by it alike.
 */
export function meetingScore(s: Separation, fit: MeetingFit | null): number {
  if (!fit || !(fit.bicGain > 0) || failedByLaw(s, fit).length > 0) return -Infinity;
  return failedByExponent(sidesOf(s, fit)).length > 0 ? -Infinity : fit.bicGain;
}

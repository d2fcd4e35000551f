import { lnNormalTail, normalHazard } from '../normal-tail';
import { noisyLaw, type SizeKind } from './broadened-law';

/** Log of a density above the beginning of a tail, with integral 1 there. */
export type TailDensity = (sizeMS: number) => number;

const LN_2PI = Math.log(2 * Math.PI);
/** A log-normal wider than this is a power law over any range that data span. */
const WIDEST = 20;
const ROUNDS = 60;
const GOLDEN = (Math.sqrt(5) - 1) / 2;

/** The law broadened by noise of `noiseShare` times where it begins. */
export function powerLawDensity(
  alpha: number,
  fromMS: number,
  noiseShare = 0,
  kind: SizeKind = 'component',
): TailDensity {
  const { second, fourth, norm } = noisyLaw(alpha, noiseShare, kind);
  const lnNorm = Math.log(norm * fromMS);
  return (v) => {
    const perSquare = (fromMS / v) ** 2;
    return Math.log(1 + perSquare * (second + perSquare * fourth)) - alpha * Math.log(v / fromMS) - lnNorm;
  };
}

/** Half of a Gaussian about 0, cut at the beginning, by maximum likelihood. */
export function fitGaussianTail(sizeMS: ArrayLike<number>, samples: number, fromMS: number): TailDensity {
  let meanSquare = 0;
  for (let k = 0; k < samples; k++) meanSquare += sizeMS[k] ** 2 / samples;
  // Mean square of what lies above a = from: s^2 + s a h(a / s), which grows with s.
  let low = 1e-3 * fromMS;
  let high = Math.sqrt(meanSquare);
  for (let i = 0; i < ROUNDS; i++) {
    const s = 0.5 * (low + high);
    if (s * s + s * fromMS * normalHazard(fromMS / s) < meanSquare) low = s;
    else high = s;
  }
  const s = 0.5 * (low + high);
  const lnShare = lnNormalTail(fromMS / s);
  return (v) => -0.5 * (v / s) ** 2 - 0.5 * LN_2PI - Math.log(s) - lnShare;
}

/** Log-normal cut at the beginning, by maximum likelihood: centre by bisection for each width, width by golden section. */
export function fitLogNormalTail(sizeMS: ArrayLike<number>, samples: number, fromMS: number): TailDensity {
  // u = ln(v / from) >= 0.
  let mean = 0;
  let meanSquare = 0;
  for (let k = 0; k < samples; k++) {
    const u = Math.log(sizeMS[k] / fromMS);
    mean += u / samples;
    meanSquare += (u * u) / samples;
  }
  const centreOf = (s: number) => {
    // Mean of what lies above 0 is m + s h(-m / s), which grows with m.
    let low = -50 * s * Math.max(1, s);
    let high = mean;
    for (let i = 0; i < ROUNDS; i++) {
      const m = 0.5 * (low + high);
      if (m + s * normalHazard(-m / s) < mean) low = m;
      else high = m;
    }
    return 0.5 * (low + high);
  };
  const likelihood = (s: number) => {
    const m = centreOf(s);
    const squares = meanSquare - 2 * m * mean + m * m;
    return -0.5 * (squares / (s * s)) - 0.5 * LN_2PI - Math.log(s) - lnNormalTail(-m / s);
  };
  let low = Math.log(1e-2 * Math.sqrt(meanSquare));
  let high = Math.log(WIDEST);
  for (let i = 0; i < ROUNDS; i++) {
    const a = high - GOLDEN * (high - low);
    const b = low + GOLDEN * (high - low);
    if (likelihood(Math.exp(a)) > likelihood(Math.exp(b))) high = b;
    else low = a;
  }
  const s = Math.exp(0.5 * (low + high));
  const m = centreOf(s);
  const lnShare = lnNormalTail(-m / s);
  return (v) => {
    const u = Math.log(v / fromMS);
    return -0.5 * ((u - m) / s) ** 2 - 0.5 * LN_2PI - Math.log(s) - lnShare - Math.log(v);
  };
}

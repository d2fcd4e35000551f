import type { PdfKernel } from '../velocity-pdf-shape';
import { kernelDensity } from './kernel-density';
import { asinh, type SampleGrid } from './sample-grid';
import type { SampleSpread } from './sample-spread';

/** Fewer samples make a curve of their own Gaussians. */
export const KERNEL_SAMPLES_LEAST = 10;
/** The curve has a place every quarter width of its kernel near the middle, within these bounds. */
const STEPS_LEAST = 80;
const STEPS_MOST = 200;
const PER_WIDTH = 4;
/** It ends this many widths beyond the outermost samples. */
const WIDTHS_BEYOND = 4;
/** Digits kept of places and densities: more than any density deserves. */
const DIGITS = 7;

/**
 * Smaller of the standard deviation and the quartiles' distance over 1.34, which tails can't widen; 0 without any
 * spread.
 */
export function robustScale(
  standardDeviation: number,
  { lowerQuartile, upperQuartile }: Pick<SampleSpread, 'lowerQuartile' | 'upperQuartile'>,
): number {
  const byQuartiles = (upperQuartile - lowerQuartile) / 1.34;
  // With half of the samples equal the quartiles tell nothing.
  return byQuartiles > 0 ? Math.min(standardDeviation, byQuartiles) : standardDeviation;
}

/** Width of the kernel by Silverman, Density Estimation (1986), equation 3.31: 0.9 A n^(-1/5). */
export const silvermanWidth = (scale: number, independent: number): number =>
  0.9 * scale * independent ** -0.2;

/**
 * How many independent samples say as much as all: samples over their design effect, the variance of sums by track
 * over that of as many single samples (Kish, Survey Sampling, 1965; formula from memory). A track counts once at least.
 */
export function independentSamples(
  samples: number,
  tracks: number,
  squares: number,
  squaresOfSums: number,
): number {
  const effect = squares > 0 ? squaresOfSums / squares : 1;
  return Math.min(samples, Math.max(Math.min(tracks, samples), samples / Math.max(1, effect)));
}

/** What a kernel estimate is made of. */
export interface KernelInput {
  grid: SampleGrid;
  spread: SampleSpread;
  /** Of `robustScale`, > 0. */
  scaleMS: number;
  independent: number;
  /** Speeds can't lie below 0. */
  isSpeed: boolean;
}

/**
 * Density by Gaussian kernels whose widths follow the density itself: that of a sample is the one of Silverman's rule
 * times (f / g)^(-1/2), with f a first estimate of one width there and g the geometric mean of f over the samples
 * (Abramson, Ann. Stat. 10, 1217, 1982; Silverman 1986, section 5.3), so that few samples far out don't make bumps.
 * The curve between the places given is straight; its integral is 1.
 */
export function kernelEstimate({ grid, spread, scaleMS, independent, isSpeed }: KernelInput): PdfKernel {
  const widthMS = silvermanWidth(scaleMS, independent);
  const filled = Array.from(grid.weight.keys()).filter((k) => grid.weight[k] > 0);
  const place = Float64Array.from(filled, (k) => grid.place[k]);
  const weight = Float64Array.from(filled, (k) => grid.weight[k]);
  // A first estimate can't be finer than the grid, which is far coarser than the kernel only where samples are rare.
  const first = place.map((value) => Math.hypot(widthMS, grid.spacing(value)));
  const pilot = kernelDensity(place, { place, weight, width: first }, isSpeed);
  const width = adaptedWidths(pilot, weight, widthMS);
  let low = Infinity;
  let high = -Infinity;
  for (let i = 0; i < place.length; i++) {
    low = Math.min(low, place[i] - WIDTHS_BEYOND * width[i]);
    high = Math.max(high, place[i] + WIDTHS_BEYOND * width[i]);
  }
  const at = curvePlaces(isSpeed ? 0 : low, high, spread.median, scaleMS, widthMS);
  const density = kernelDensity(at, { place, weight, width }, isSpeed);
  const integral = trapezoids(at, density);
  return {
    widthMS,
    independent: Math.round(independent),
    atMS: Array.from(at, toDigits),
    density: Array.from(density, (value) => toDigits(value / integral)),
    toldFromMS: spread.nearLeast,
    toldToMS: spread.nearMost,
  };
}

/** Widths after Abramson from a first estimate at the samples. */
function adaptedWidths(pilot: Float64Array, weight: Float64Array, widthMS: number): Float64Array {
  let lnSum = 0;
  let total = 0;
  for (let i = 0; i < pilot.length; i++) {
    lnSum += weight[i] * Math.log(pilot[i]);
    total += weight[i];
  }
  const geometricMean = Math.exp(lnSum / total);
  return pilot.map((density) => widthMS * Math.sqrt(geometricMean / density));
}

/** Evenly spaced near the middle, by equal ratios far out. */
function curvePlaces(low: number, high: number, middle: number, scale: number, width: number): Float64Array {
  const first = asinh((low - middle) / scale);
  const range = asinh((high - middle) / scale) - first;
  const wanted = Math.ceil((PER_WIDTH * range * scale) / width);
  const steps = Math.max(STEPS_LEAST, Math.min(STEPS_MOST, wanted));
  const at = Float64Array.from(
    { length: steps + 1 },
    (_, k) => middle + scale * Math.sinh(first + (range * k) / steps),
  );
  at[0] = low;
  at[steps] = high;
  return at;
}

function trapezoids(at: Float64Array, value: Float64Array): number {
  let sum = 0;
  for (let k = 1; k < at.length; k++) sum += 0.5 * (value[k] + value[k - 1]) * (at[k] - at[k - 1]);
  return sum;
}

// Adding 0 turns a negative zero, which JSON would not keep, into a plain one.
const toDigits = (value: number) => Number(value.toPrecision(DIGITS)) + 0;

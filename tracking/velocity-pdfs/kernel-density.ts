/** Gaussians are left out beyond so many widths, where they have fallen by 10^8. */
const REACH = 6;
const PER_ROOT_2PI = 1 / Math.sqrt(2 * Math.PI);

/** Weighted samples at ascending places, and the width of the Gaussian that stands for each place, > 0. */
export interface Kernels {
  place: ArrayLike<number>;
  weight: ArrayLike<number>;
  width: ArrayLike<number>;
}

/**
 * Density at ascending places: the mean of Gaussians about the samples. Near a wall at 0, below which nothing can lie,
 * samples stand for their mirror images too, so that no probability is lost behind it (Silverman, Density Estimation,
 * 1986, section 2.10).
 *
 * @returns an entry for each place of `at`; what is below the wall means nothing.
 */
export function kernelDensity(at: ArrayLike<number>, kernels: Kernels, isWalled = false): Float64Array {
  const density = new Float64Array(at.length);
  const { place, weight, width } = kernels;
  let total = 0;
  for (let i = 0; i < place.length; i++) {
    if (!(weight[i] > 0)) continue;
    total += weight[i];
    addGaussian(density, at, place[i], weight[i], width[i]);
    if (isWalled) addGaussian(density, at, -place[i], weight[i], width[i]);
  }
  for (let k = 0; k < density.length; k++) density[k] /= total;
  return density;
}

function addGaussian(
  to: Float64Array,
  at: ArrayLike<number>,
  middle: number,
  weight: number,
  width: number,
): void {
  const height = (weight * PER_ROOT_2PI) / width;
  const end = middle + REACH * width;
  for (let k = firstFrom(at, middle - REACH * width); k < at.length && at[k] <= end; k++) {
    const z = (at[k] - middle) / width;
    to[k] += height * Math.exp(-0.5 * z * z);
  }
}

/** First place at or above a value. */
function firstFrom(at: ArrayLike<number>, value: number): number {
  let low = 0;
  let high = at.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (at[middle] < value) low = middle + 1;
    else high = middle;
  }
  return low;
}

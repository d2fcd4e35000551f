import { createRandom, mixSeed } from '../random';

/** Less light than this on a pixel adds nothing that could be seen. */
const LIGHT_LEAST_E = 1e-4;

/** The camera that took the frames into which particles are planted. */
export interface PlantCamera {
  gainCountsPerE: number;
  /** Count at which it saturates. */
  mostCounts: number;
  seed: number;
}

/**
 * Adds the light of planted particles to a recorded frame: Poisson counts of their expected
 * photoelectrons times the gain. Background and read noise are those of the frame itself.
 *
 * @param counts camera counts of the frame, row by row; left as they are.
 * @param lightE expected photoelectrons of the planted particles, as long.
 * @returns whole counts, 0 to `mostCounts`.
 */
export function plantInFrame(
  counts: Float32Array,
  lightE: Float32Array,
  frameIndex: number,
  { gainCountsPerE, mostCounts, seed }: PlantCamera,
): Uint16Array {
  if (counts.length !== lightE.length) {
    throw new RangeError(`The light must have ${counts.length} pixels. Received ${lightE.length}.`);
  }
  const random = createRandom(mixSeed(seed, frameIndex));
  const planted = new Uint16Array(counts.length);
  for (let i = 0; i < counts.length; i++) {
    const light = lightE[i] > LIGHT_LEAST_E ? gainCountsPerE * random.poisson(lightE[i]) : 0;
    planted[i] = Math.min(mostCounts, Math.max(0, Math.round(counts[i] + light)));
  }
  return planted;
}

import type { LagSamples } from '../velocity-pdfs/component-samples';

/** Sizes of velocity of one population, largest first, and the tracks that they come from. */
export interface TailSamples {
  /** Descending, m/s. */
  sizeMS: Float64Array;
  track: Uint32Array;
}

/**
 * Sizes of a velocity component about its median over the tracks taken. Only displacements that do not
 * overlap are kept: those that do tell the same twice.
 *
 * @param values one component of every sample, m/s.
 * @param centred false where the size itself is the quantity, as for the speed.
 */
export function tailSamples(
  samples: LagSamples,
  values: Float64Array,
  lagFrames: number,
  takes: (track: number) => boolean,
  centred: boolean,
): TailSamples {
  const kept: number[] = [];
  const owner: number[] = [];
  for (let i = 0; i + 1 < samples.start.length; i++) {
    if (!takes(i)) continue;
    for (let k = samples.start[i]; k < samples.start[i + 1]; k += lagFrames) {
      kept.push(values[k]);
      owner.push(i);
    }
  }
  const sorted = Float64Array.from(kept).sort();
  const middle = centred && sorted.length > 0 ? sorted[sorted.length >> 1] : 0;
  const size = Float64Array.from(kept, (value) => Math.abs(value - middle));
  const order = Uint32Array.from(kept.keys()).sort((a, b) => size[b] - size[a]);
  return {
    sizeMS: Float64Array.from(order, (k) => size[k]),
    track: Uint32Array.from(order, (k) => owner[k]),
  };
}

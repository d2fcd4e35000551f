import { orderStatistics } from '../order-statistics';
import type { ComponentReader } from '../velocity-pdfs/component-samples';
import { mostInTail, TAIL_SAMPLES_LEAST } from './power-law-tail';
import { sortLargestFirst } from './sort-largest-first';

/** The largest sizes of velocity of one population, and the tracks that they come from. */
export interface TailSamples {
  /** Samples in all, of which those that can't be in a tail are left out. */
  samples: number;
  /** Descending, m/s; of equal ones that of the first track comes first. */
  sizeMS: Float64Array;
  track: Uint32Array;
}

/**
 * Sizes of a velocity component about its median over the tracks taken, as far as a tail may hold them: the larger
 * half, not below `floorMS`. Only displacements that do not overlap are looked at: those that do tell the same twice.
 *
 * @param centred false where the size itself is the quantity, as for the speed.
 */
export function tailSamples(
  reader: ComponentReader,
  tracks: number,
  lagFrames: number,
  takes: (track: number) => boolean,
  centred: boolean,
  floorMS: number,
): TailSamples {
  const each = (visit: (value: number, track: number) => void) => {
    for (let i = 0; i < tracks; i++) {
      if (!takes(i)) continue;
      const n = reader.read(i);
      for (let k = 0; k < n; k += lagFrames) visit(reader.values[k], i);
    }
  };
  let samples = 0;
  each(() => samples++);
  const none = { samples, sizeMS: new Float64Array(0), track: new Uint32Array(0) };
  const most = mostInTail(samples);
  if (most < TAIL_SAMPLES_LEAST) return none;
  const middle = centred ? orderStatistics(each, [samples >> 1])[0] : 0;
  const count = (leastMS: number) => {
    let found = 0;
    each((value) => void (Math.abs(value - middle) >= leastMS && found++));
    return found;
  };
  let leastMS = floorMS;
  let found = count(leastMS);
  if (found > most) {
    const eachSize = (visit: (size: number) => void) => each((value) => visit(Math.abs(value - middle)));
    [leastMS] = orderStatistics(eachSize, [samples - most]);
    found = count(leastMS);
  }
  if (found < TAIL_SAMPLES_LEAST) return none;
  const size = new Float64Array(found);
  const owner = new Uint32Array(found);
  let at = 0;
  each((value, track) => {
    const one = Math.abs(value - middle);
    if (!(one >= leastMS)) return;
    size[at] = one;
    owner[at++] = track;
  });
  sortLargestFirst(size, owner);
  return { samples, sizeMS: size, track: owner };
}

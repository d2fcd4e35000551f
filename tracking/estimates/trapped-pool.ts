import { TRAPPED, UNDECIDED } from '../populations/codes';
import { POINT_BRIDGED, type Conditions, type Tracks } from '../types';

/** Trapped tracks and what they have in common. */
export interface TrappedPool {
  /** 1 for trapped tracks. */
  chosen: Uint8Array;
  tracks: number;
  /** Points of trapped tracks per frame, bridged frames included: the tracer is there all the same. */
  perFrame: number;
  /** The same per area, m^-2. */
  perAreaM2: number;
  areaM2: number;
  /** Common drift, px per frame. */
  driftPx: [number, number];
  /** Share of all points that belong to tracks with a name. */
  namedShare: number;
}

/** Gathers the trapped tracks of a recording. */
export function trappedPool(
  tracks: Tracks,
  population: Uint8Array,
  image: { width: number; height: number; frames: number },
  conditions: Pick<Conditions, 'pixelSize_m'>,
): TrappedPool {
  const chosen = new Uint8Array(tracks.count);
  const drift: [number, number] = [0, 0];
  let steps = 0;
  let points = 0;
  let named = 0;
  let count = 0;
  for (let i = 0; i < tracks.count; i++) {
    const from = tracks.start[i];
    const last = tracks.start[i + 1] - 1;
    if (population[i] !== UNDECIDED) named += last + 1 - from;
    if (population[i] !== TRAPPED) continue;
    chosen[i] = 1;
    count++;
    points += last + 1 - from;
    if ((tracks.flags[from] | tracks.flags[last]) & POINT_BRIDGED) continue;
    drift[0] += tracks.xPx[last] - tracks.xPx[from];
    drift[1] += tracks.yPx[last] - tracks.yPx[from];
    steps += last - from;
  }
  const areaM2 = image.width * image.height * conditions.pixelSize_m ** 2;
  const perFrame = points / image.frames;
  return {
    chosen,
    tracks: count,
    perFrame,
    perAreaM2: perFrame / areaM2,
    areaM2,
    driftPx: steps > 0 ? [drift[0] / steps, drift[1] / steps] : [0, 0],
    namedShare: tracks.frame.length > 0 ? named / tracks.frame.length : 0,
  };
}

import { FREE, TRAPPED, UNDECIDED, UNKNOWN, type TrackBlock } from '@/components/canvas/track-block';
import { POINT_BRIDGED, SPOT_EDGE, SPOT_ELONGATED, SPOT_OVERLAP, SPOT_SATURATED } from '@/tracking/types';

/** Which tracks are shown in the picture and in the list. */
export interface TrackFilter {
  population: 'all' | 'trapped' | 'free' | 'undecided';
  /** Frames of the whole track; null for no bound. */
  leastFrames: number | null;
  mostFrames: number | null;
  flag: FlagName;
}

export type FlagName = 'any' | 'bridged' | 'overlapping' | 'edge' | 'saturated' | 'elongated' | 'corrected';

export const EVERY_TRACK: TrackFilter = {
  population: 'all',
  leastFrames: null,
  mostFrames: null,
  flag: 'any',
};

/** Flags that a track can be asked for, in words. */
export const FLAG_WORDS: Record<FlagName, string> = {
  any: 'any',
  bridged: 'missed in a frame',
  overlapping: 'overlapping spots',
  edge: 'at the edge',
  saturated: 'saturated',
  elongated: 'elongated',
  corrected: 'corrected by a person',
};

const BITS: Partial<Record<FlagName, number>> = {
  bridged: POINT_BRIDGED,
  overlapping: SPOT_OVERLAP,
  edge: SPOT_EDGE,
  saturated: SPOT_SATURATED,
  elongated: SPOT_ELONGATED,
};
const CODES = { trapped: TRAPPED, free: FREE, undecided: UNDECIDED } as const;

export const isEveryTrack = (filter: TrackFilter): boolean =>
  (Object.keys(EVERY_TRACK) as (keyof TrackFilter)[]).every((key) => filter[key] === EVERY_TRACK[key]);

/**
 * A test of a block's entries. Flags are looked for in the frames of the block, which is what can be
 * seen around the frame shown.
 * @param corrected whether a person changed the track.
 */
export function filterTest(
  block: TrackBlock,
  filter: TrackFilter,
  corrected: (track: number) => boolean,
): (i: number) => boolean {
  const bit = BITS[filter.flag] ?? 0;
  const least = filter.leastFrames ?? 0;
  const most = filter.mostFrames ?? Infinity;
  return (i) => {
    const population = block.population[i];
    if (filter.population !== 'all') {
      const known = population === UNKNOWN ? UNDECIDED : population;
      if (known !== CODES[filter.population]) return false;
    }
    const frames = block.lastFrame[i] - block.firstFrame[i] + 1;
    if (frames < least || frames > most) return false;
    if (filter.flag === 'corrected') return corrected(block.track[i]);
    return bit === 0 || hasFlag(block, i, bit);
  };
}

function hasFlag(block: TrackBlock, i: number, bit: number): boolean {
  for (let k = block.start[i]; k < block.start[i + 1]; k += 1) if (block.flags[k] & bit) return true;
  return false;
}

import { closePairs, partnersOf } from '../pairs/close-pairs';
import type { Tracks } from '../types';
import { pairMotion, type PairMotion } from './pair-motion';
import { PairMotions } from './pair-motions';
import type { TrappedPool } from './trapped-pool';

/** Pairs are looked at within this many typical distances of trapped tracers, and a part of the image. */
const REACH_DISTANCES = 3;
const REACH_IMAGE_PART = 0.25;
/** Pairs that share enough frames to be told apart are met in one of every so many frames. */
const LOOK_EVERY = 4;
/** Lengths of common tracks tried, frames: longer ones tell better but are fewer. */
const LEAST_FRAMES = [8, 12, 16, 24, 32, 48, 64, 96] as const;
/** Wrong bonds per tracer that still leave lines apart. */
const WRONG_BONDS_MAX = 0.02;

/** Which tracers move as one line. */
export interface LineGroups {
  /** Number of the line of a trapped track, -1 for the others. */
  line: Int32Array;
  lines: number;
  /** Pairs in reach long enough to tell, and the reach, px. */
  pairs: Iterable<PairMotion>;
  reachPx: number;
  /** Pairs in reach that are too short or too still to tell. */
  untold: Iterable<PairMotion>;
  /** Chance that two independent tracks keep their separation. */
  wrongChance: number;
  /** Frames that two tracks must share to be told apart or joined. */
  leastFrames: number;
  /** False where wrong bonds would join everything; then every track is a line of its own. */
  told: boolean;
}

/** Joins trapped tracers that keep their separation while both move: they sit on one line. */
export function lineGroups(
  tracks: Tracks,
  pool: TrappedPool,
  image: { width: number; height: number; frames: number },
): LineGroups {
  const typicalPx = Math.sqrt((image.width * image.height) / Math.max(1, pool.perFrame));
  const reachPx = Math.min(
    REACH_DISTANCES * typicalPx,
    REACH_IMAGE_PART * Math.min(image.width, image.height),
  );
  const motions = pool.tracks > 1 ? motionsWithin(reachPx) : new PairMotions(0);
  const tells = (m: PairMotion) => m.telling && m.measured >= leastFrames;
  let wrongChance = 1;
  let told = false;
  let leastFrames: number = LEAST_FRAMES[0];
  for (const least of LEAST_FRAMES) {
    leastFrames = least;
    let [telling, wrong, common] = [0, 0, 0];
    for (const m of motions) {
      if (!tells(m)) continue;
      telling++;
      if (m.rigidWhenTurned) wrong++;
      common += m.common;
    }
    if (telling === 0) break;
    wrongChance = wrong / telling;
    // Bonds of a tracer at a time: pairs count for the frames they share.
    const bonds = (2 * common) / (pool.perFrame * image.frames);
    told = wrongChance * bonds <= WRONG_BONDS_MAX;
    if (told) break;
  }
  const parent = Int32Array.from({ length: tracks.count }, (_, i) => i);
  const root = (i: number): number => {
    while (parent[i] !== i) i = parent[i] = parent[parent[i]];
    return i;
  };
  if (told) {
    for (const m of motions) if (m.rigid && tells(m)) parent[root(m.trackB)] = root(m.trackA);
  }
  const line = new Int32Array(tracks.count).fill(-1);
  const names = new Map<number, number>();
  for (let i = 0; i < tracks.count; i++) {
    if (pool.chosen[i] !== 1) continue;
    const of = root(i);
    if (!names.has(of)) names.set(of, names.size);
    line[i] = names.get(of) ?? -1;
  }
  return {
    line,
    lines: names.size,
    pairs: told ? motions.where(tells) : [],
    untold: motions.where((m) => !tells(m)),
    reachPx,
    wrongChance,
    leastFrames,
    told,
  };

  function motionsWithin(reach: number): PairMotions {
    // Meetings are forgotten before motions are kept: of a long recording there are hundreds of thousands of each.
    const { from, partner } = partnersOf(
      closePairs(tracks, pool.chosen, image, reach, LOOK_EVERY, true),
      tracks.count,
    );
    const found = new PairMotions(from[tracks.count]);
    for (let a = 0; a < tracks.count; a++) {
      for (let k = from[a]; k < from[a + 1]; k++) {
        const motion = pairMotion(tracks, a, partner[k], pool.driftPx);
        if (motion) found.push(motion);
      }
    }
    return found;
  }
}

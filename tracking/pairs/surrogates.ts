import type { Random } from '../random';
import type { Tracks } from '../types';
import { pointsByFrame } from './points-by-frame';
import { fitMeeting } from './meeting-fit';
import { meetingScore, REDUCED_CHI2_MAX } from './judge-meeting';
import { meetsAndParts, seenSide, separationAround, type SeenSide } from './separation';

/** Meetings of independent tracks to collect for every one tested, within bounds, and tries for each. */
const PER_TESTED = 3;
const WANTED = { least: 1000, most: 6000 } as const;
const TRIES_PER_WANTED = 30;

/** Scores of chance meetings with the weight of each, and what is seen of them. */
export interface ChanceMeetings {
  score: Float64Array;
  weight: Float64Array;
  seen: SeenSide[];
}

/**
 * Lays one track over another: two random tracks of one random frame, the second moved as a whole
 * so that they lie within reach there, which keeps the motion of each and their common drift but
 * breaks every bond between them. A slow pair is hit in proportion to the frames it stays within
 * reach, hence its weight of one over those.
 *
 * @param chosen 1 for tracks to draw from.
 * @param tested meetings that will be judged by it.
 * @param met keys of pairs that really met: they may be what is looked for, so they are not drawn.
 */
export function chanceMeetings(
  random: Random,
  tracks: Tracks,
  chosen: Uint8Array,
  frames: number,
  reachPx: number,
  scale: { pixelSize_m: number; frameInterval_s: number },
  met: ReadonlySet<number>,
  tested: number,
): ChanceMeetings {
  const { order, from, track } = pointsByFrame(tracks, chosen, frames);
  const wanted = Math.max(WANTED.least, Math.min(WANTED.most, PER_TESTED * tested));
  const score: number[] = [];
  const weight: number[] = [];
  const seen: SeenSide[] = [];
  for (let i = 0; i < TRIES_PER_WANTED * wanted && score.length < wanted && order.length > 1; i++) {
    const p = order[random.integer(order.length)];
    const frame = tracks.frame[p];
    const others = from[frame + 1] - from[frame];
    if (others < 2) continue;
    const q = order[from[frame] + random.integer(others)];
    if (p === q || met.has(pairKey(tracks, track[p], track[q]))) continue;
    const distance = reachPx * Math.sqrt(random.uniform());
    const angle = 2 * Math.PI * random.uniform();
    const shift = {
      x: tracks.xPx[p] + distance * Math.cos(angle) - tracks.xPx[q],
      y: tracks.yPx[p] + distance * Math.sin(angle) - tracks.yPx[q],
    };
    const near = framesWithin(tracks, track[p], track[q], shift, reachPx);
    const s = separationAround(tracks, track[p], track[q], near.nearestFrame, scale.pixelSize_m, shift);
    if (!meetsAndParts(s)) continue;
    seen.push(seenSide(s) ?? 'both');
    score.push(meetingScore(s, fitMeeting(s, scale.frameInterval_s, REDUCED_CHI2_MAX)));
    // A frame of n tracks is drawn in proportion to n but has n^2 pairs.
    weight.push(others / near.frames);
  }
  return { score: Float64Array.from(score), weight: Float64Array.from(weight), seen };
}

/** One number per pair of tracks, in any order. */
export function pairKey(tracks: Tracks, trackA: number, trackB: number): number {
  return Math.min(trackA, trackB) * tracks.count + Math.max(trackA, trackB);
}

/**
 * Chance of a score this good or better among chance meetings of which as much is seen; never below
 * 1 / (effective + 1), the effective number being that of equally weighted meetings which carry as much
 * information (Kish 1965).
 */
export function chanceOf(score: number, seen: SeenSide, chance: ChanceMeetings): number {
  if (score === -Infinity) return 1;
  let better = 0;
  let all = 0;
  let squares = 0;
  for (let i = 0; i < chance.score.length; i++) {
    if (chance.seen[i] !== seen) continue;
    all += chance.weight[i];
    squares += chance.weight[i] ** 2;
    if (chance.score[i] >= score) better += chance.weight[i];
  }
  const effective = squares > 0 ? (all * all) / squares : 0;
  const share = all > 0 ? better / all : 0;
  return (1 + share * effective) / (1 + effective);
}

function framesWithin(
  tracks: Tracks,
  trackA: number,
  trackB: number,
  shift: { x: number; y: number },
  reachPx: number,
): { frames: number; nearestFrame: number } {
  const firstA = tracks.frame[tracks.start[trackA]];
  const firstB = tracks.frame[tracks.start[trackB]];
  const low = Math.max(firstA, firstB);
  const high = Math.min(
    firstA + tracks.start[trackA + 1] - tracks.start[trackA],
    firstB + tracks.start[trackB + 1] - tracks.start[trackB],
  );
  let frames = 0;
  let nearestFrame = low;
  let least = Infinity;
  for (let f = low; f < high; f++) {
    const p = tracks.start[trackA] + f - firstA;
    const q = tracks.start[trackB] + f - firstB;
    const d = Math.hypot(tracks.xPx[q] + shift.x - tracks.xPx[p], tracks.yPx[q] + shift.y - tracks.yPx[p]);
    if (d <= reachPx) frames++;
    if (d < least) {
      least = d;
      nearestFrame = f;
    }
  }
  return { frames: Math.max(1, frames), nearestFrame };
}

import { scoreTracks } from '../assess/track-scores';
import { linkSpots } from '../link';
import { createRandom, mixSeed, type Random } from '../random';
import { createSpotSink } from '../spots';
import { POINT_BRIDGED, type Spots, type Tracks } from '../types';

/** How well tracers are linked that can be predicted so well and are so far apart. */
export interface DifficultyRow {
  /** R.m.s. prediction error (both axes) over mean distance to the nearest neighbour. */
  difficulty: number;
  /** R.m.s. prediction error per axis, px, that a constant-velocity filter can reach at best. */
  predictionErrorPx: number;
  links: number;
  /** Links between spots of different tracers, out of all. */
  wrongLinkShare: number;
  /** Wrong links expected of whoever takes the nearest spot: an upper guide. */
  nearestChoiceShare: number;
  alpha: number;
  jaccard: number;
}

export interface DifficultyOptions {
  seed: number;
  /** Scatter of single positions around uniform motion, px; a row each. */
  scattersPx: readonly number[];
  widthPx?: number;
  heightPx?: number;
  frames?: number;
  tracersPerPx2?: number;
  /** R.m.s. velocity per axis, px per frame. */
  speedPx?: number;
}

interface Movers {
  spots: Spots;
  /** Which mover each spot is of. */
  owner: Int32Array;
}

/** Chance that another spot is nearer to a prediction than the right one: p = c / (1 + c), c = 2 pi n s^2 (Poisson field of density n, error s per axis). */
export function nearestWrongShare(spotsPerPx2: number, variancePx2: number): number {
  const crowd = 2 * Math.PI * spotsPerPx2 * variancePx2;
  return crowd / (1 + crowd);
}

/**
 * Uniform movers of equal brightness, places and velocities by chance, each position scattered by
 * a known amount: linked and compared with the truth, row by row more difficult.
 *
 * Guide: a wrong spot is nearer than the right one with probability 2 pi n s^2 / (1 + 2 pi n s^2)
 * for density n and prediction error s per axis, averaged over frames since birth.
 */
export function studyLinkingDifficulty(options: DifficultyOptions): DifficultyRow[] {
  const { widthPx = 400, heightPx = 400, frames = 40, tracersPerPx2 = 0.002, speedPx = 1.5 } = options;
  const spacing = 0.5 / Math.sqrt(tracersPerPx2);
  return options.scattersPx.map((scatterPx, row) => {
    const random = createRandom(mixSeed(options.seed, row));
    const movers = drawMovers(random, widthPx, heightPx, frames, tracersPerPx2, speedPx, scatterPx);
    const recipe = {
      longestStepPx: 4 * (speedPx + 1.5 * scatterPx),
      mayVanishFrames: 0,
      shortestTrackFrames: 1,
    };
    const tracks = linkSpots(movers.spots, { frames, width: widthPx, height: heightPx }, recipe);
    const errors = predictionVariances(frames, speedPx * speedPx, scatterPx * scatterPx);
    const mean = (of: (variance: number) => number) =>
      errors.reduce((sum, variance) => sum + of(variance), 0) / errors.length;
    const predictionErrorPx = Math.sqrt(mean((variance) => variance));
    const scores = scoreTracks(trueTracks(movers), withoutBridges(tracks), frames);
    return {
      difficulty: (Math.SQRT2 * predictionErrorPx) / spacing,
      predictionErrorPx,
      ...wrongLinks(tracks, movers),
      nearestChoiceShare: mean((variance) => nearestWrongShare(tracersPerPx2, variance)),
      alpha: scores.alpha,
      jaccard: scores.jaccard,
    };
  });
}

function drawMovers(
  random: Random,
  width: number,
  height: number,
  frames: number,
  perPx2: number,
  speed: number,
  scatter: number,
): Movers {
  // Movers from as far outside as they can come in from.
  const margin = 3 * speed * frames;
  const count = random.poisson(perPx2 * (width + 2 * margin) * (height + 2 * margin));
  const x = new Float64Array(count);
  const y = new Float64Array(count);
  const vx = new Float64Array(count);
  const vy = new Float64Array(count);
  for (let i = 0; i < count; i++) {
    x[i] = (width + 2 * margin) * random.uniform() - margin;
    y[i] = (height + 2 * margin) * random.uniform() - margin;
    vx[i] = speed * random.normal();
    vy[i] = speed * random.normal();
  }
  const sink = createSpotSink();
  const owner: number[] = [];
  for (let f = 0; f < frames; f++) {
    const seen: { i: number; x: number; y: number }[] = [];
    for (let i = 0; i < count; i++) {
      const place = {
        i,
        x: x[i] + f * vx[i] + scatter * random.normal(),
        y: y[i] + f * vy[i] + scatter * random.normal(),
      };
      if (place.x >= 0 && place.y >= 0 && place.x < width && place.y < height) seen.push(place);
    }
    seen.sort((a, b) => a.y - b.y || a.x - b.x);
    for (const place of seen) {
      sink.push(f, place.x, place.y, scatter, scatter, 100, 10, 0);
      owner.push(place.i);
    }
  }
  return { spots: sink.spots(), owner: Int32Array.from(owner) };
}

/**
 * Variances per axis of spot minus prediction in the second, third, ... frame of a mover's life:
 * Kalman's recursion for uniform motion without any disturbance.
 */
function predictionVariances(frames: number, startVariance: number, noise: number): number[] {
  const variances: number[] = [];
  let pp = noise;
  let pv = 0;
  let vv = startVariance;
  for (let f = 1; f < frames; f++) {
    pp += 2 * pv + vv;
    pv += vv;
    variances.push(pp + noise);
    const gain = pp / (pp + noise);
    const gainV = pv / (pp + noise);
    vv -= gainV * pv;
    pv *= 1 - gain;
    pp *= 1 - gain;
  }
  return variances;
}

function wrongLinks(tracks: Tracks, { spots, owner }: Movers) {
  const name = (frame: number, x: number, y: number) => `${frame} ${x} ${y}`;
  const ownerOf = new Map<string, number>();
  for (let s = 0; s < spots.count; s++) {
    ownerOf.set(name(spots.frame[s], spots.xPx[s], spots.yPx[s]), owner[s]);
  }
  let links = 0;
  let wrong = 0;
  for (let i = 0; i < tracks.count; i++) {
    let previous: number | undefined;
    for (let p = tracks.start[i]; p < tracks.start[i + 1]; p++) {
      const mine = ownerOf.get(name(tracks.frame[p], tracks.xPx[p], tracks.yPx[p]));
      if (mine === undefined) continue;
      if (previous !== undefined) {
        links++;
        if (mine !== previous) wrong++;
      }
      previous = mine;
    }
  }
  return { links, wrongLinkShare: wrong / Math.max(1, links) };
}

function trueTracks({ spots, owner }: Movers) {
  const order = Uint32Array.from(owner.keys()).sort((a, b) => owner[a] - owner[b] || a - b);
  const start: number[] = [];
  order.forEach((s, k) => {
    if (k === 0 || owner[s] !== owner[order[k - 1]]) start.push(k);
  });
  start.push(order.length);
  const pick = (from: ArrayLike<number>) => Float64Array.from(order, (s) => from[s]);
  return { start, frame: pick(spots.frame), xPx: pick(spots.xPx), yPx: pick(spots.yPx) };
}

function withoutBridges(tracks: Tracks) {
  const start = [0];
  const kept: number[] = [];
  for (let i = 0; i < tracks.count; i++) {
    for (let p = tracks.start[i]; p < tracks.start[i + 1]; p++) {
      if ((tracks.flags[p] & POINT_BRIDGED) === 0) kept.push(p);
    }
    start.push(kept.length);
  }
  const pick = (from: ArrayLike<number>) => Float64Array.from(kept, (p) => from[p]);
  return { start, frame: pick(tracks.frame), xPx: pick(tracks.xPx), yPx: pick(tracks.yPx) };
}

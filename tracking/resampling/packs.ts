import type { Random } from '../random';

/** Tracks are resampled in this many random packs at most: its own error is then 7 % of the band. */
export const PACKS_MAX = 100;

/** Tracks in random packs of nearly the same number, and how often each draw takes each pack. */
export interface TrackPacks {
  packs: number;
  /** Pack of each track. */
  pack: Uint8Array;
  draws: number;
  /** Multiplicities: `draws` rows of `packs`. */
  weights: Uint16Array;
}

/** Packs for a bootstrap over whole tracks, whose samples depend on each other. */
export function packTracks(random: Random, tracks: number, draws: number): TrackPacks {
  const packs = Math.min(PACKS_MAX, Math.max(1, tracks));
  const pack = assignPacks(random, tracks);
  return { packs, pack, draws, weights: bootstrapWeights(random, packs, draws) };
}

/** Multiplicities of packs in every draw, draws rows of packs. */
export function bootstrapWeights(random: Random, packs: number, draws: number): Uint16Array {
  const weights = new Uint16Array(packs * draws);
  for (let d = 0; d < draws; d++) {
    for (let i = 0; i < packs; i++) weights[d * packs + random.integer(packs)]++;
  }
  return weights;
}

/** Random packs of nearly the same number of tracks. */
function assignPacks(random: Random, tracks: number): Uint8Array {
  const order = Uint32Array.from({ length: tracks }, (_, i) => i);
  for (let i = tracks - 1; i > 0; i--) {
    const j = random.integer(i + 1);
    [order[i], order[j]] = [order[j], order[i]];
  }
  const pack = new Uint8Array(tracks);
  order.forEach((track, place) => (pack[track] = place % PACKS_MAX));
  return pack;
}

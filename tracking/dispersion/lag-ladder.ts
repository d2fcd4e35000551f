import type { Tracks } from '../types';

/** Lags beyond this share of a long track rest on too few independent displacements. */
const SHARE_OF_TRACK = 0.25;
/** A long track: longer than all but this share of them. */
const LONG_SHARE = 0.1;
const LAGS_LEAST = 4;

/**
 * Lags in steps of about a third of an octave, 1, 2, 3, 4, 5, 6, 8, 10, 13, ..., up to a quarter of the length
 * that one track in ten exceeds.
 */
export function lagLadder(tracks: Tracks): number[] {
  const lengths = Uint32Array.from({ length: tracks.count }, (_, i) => tracks.start[i + 1] - tracks.start[i]);
  lengths.sort();
  const long = lengths[Math.floor((1 - LONG_SHARE) * (lengths.length - 1))] ?? 0;
  const most = Math.max(LAGS_LEAST, Math.floor(SHARE_OF_TRACK * long));
  const lags: number[] = [];
  for (let step = 0, lag = 1; lag <= most; step++) {
    lags.push(lag);
    lag = Math.max(lag + 1, Math.round(2 ** ((step + 1) / 3)));
  }
  return lags;
}

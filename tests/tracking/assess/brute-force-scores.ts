import type { ComparedTracks } from '@/tracking/assess/track-overlap';
import type { TrackScores } from '@/tracking/assess/track-scores';

type Place = [xPx: number, yPx: number];

/**
 * The scores straight from the definitions of Chenouard et al., Nat. Methods 11, 281 (2014), with
 * every way of pairing tried out: for a handful of tracks only.
 */
export function bruteForceScores(
  truth: ComparedTracks,
  estimated: ComparedTracks,
  frames: number,
  gatePx: number,
): TrackScores {
  const X = byFrame(truth);
  const Y = byFrame(estimated);
  const dummy = new Map<number, Place>();
  let best = { distance: Infinity, pairing: [] as number[] };
  for (const pairing of pairings(X.length, Y.length)) {
    const distance = pairing.reduce(
      (sum, j, i) => sum + trackDistance(X[i], j < 0 ? dummy : Y[j], frames, gatePx),
      0,
    );
    if (distance < best.distance) best = { distance, pairing };
  }
  const nothing = X.reduce((sum, track) => sum + trackDistance(track, dummy, frames, gatePx), 0);
  const spurious = Y.filter((_, j) => !best.pairing.includes(j)).reduce(
    (sum, track) => sum + trackDistance(track, dummy, frames, gatePx),
    0,
  );
  let both = 0;
  let squares = 0;
  best.pairing.forEach((j, i) => {
    for (const [frame, place] of X[i]) {
      const other = j < 0 ? undefined : Y[j].get(frame);
      if (!other || away(place, other) >= gatePx) continue;
      both++;
      squares += away(place, other) ** 2;
    }
  });
  const points = (tracks: Map<number, Place>[]) => tracks.reduce((sum, track) => sum + track.size, 0);
  const pairs = best.pairing.filter((j) => j >= 0).length;
  return {
    alpha: 1 - best.distance / nothing,
    beta: (nothing - best.distance) / (nothing + spurious),
    jaccard: both / (points(X) + points(Y) - both),
    jaccardTracks: pairs / (X.length + Y.length - pairs),
    rmsePx: Math.sqrt(squares / both),
  };
}

/** For each true track the number of an estimated one, none twice, or -1 for a dummy: all ways. */
function pairings(rows: number, columns: number): number[][] {
  if (rows === 0) return [[]];
  return pairings(rows - 1, columns).flatMap((rest) => [
    [...rest, -1],
    ...Array.from({ length: columns }, (_, j) => j)
      .filter((j) => !rest.includes(j))
      .map((j) => [...rest, j]),
  ]);
}

/** Sum over all frames of the distance, at most the gate, and the gate where only one of the two exists. */
function trackDistance(a: Map<number, Place>, b: Map<number, Place>, frames: number, gatePx: number): number {
  let sum = 0;
  for (let t = 0; t < frames; t++) {
    const p = a.get(t);
    const q = b.get(t);
    if (p && q) sum += Math.min(gatePx, away(p, q));
    else if (p || q) sum += gatePx;
  }
  return sum;
}

const away = (a: Place, b: Place): number => Math.hypot(a[0] - b[0], a[1] - b[1]);

const byFrame = ({ start, frame, xPx, yPx }: ComparedTracks): Map<number, Place>[] =>
  Array.from({ length: start.length - 1 }, (_, i) => {
    const points = Array.from({ length: start[i + 1] - start[i] }, (_unused, k) => start[i] + k);
    return new Map(points.map((p) => [frame[p], [xPx[p], yPx[p]]]));
  });

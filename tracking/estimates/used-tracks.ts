import type { Tracks } from '../types';
import type { LineGroups } from './line-groups';

/**
 * Tracks shorter than this many times what tells two apart are left out where lines are counted: they could
 * not be joined to their lines and would count as lines of their own.
 */
const LENGTH_FACTOR = 2;

/** Trapped tracks long enough to be joined to their lines. */
export interface UsedTracks {
  /** 1 for those tracks. */
  used: Uint8Array;
  /** Their points by line, and those of all trapped tracks. */
  pointsByLine: Float64Array;
  allPointsByLine: Float64Array;
}

export function usedTracks(tracks: Tracks, groups: LineGroups): UsedTracks {
  const used = new Uint8Array(tracks.count);
  const pointsByLine = new Float64Array(groups.lines);
  const allPointsByLine = new Float64Array(groups.lines);
  groups.line.forEach((line, i) => {
    if (line < 0) return;
    const points = tracks.start[i + 1] - tracks.start[i];
    allPointsByLine[line] += points;
    if (points < LENGTH_FACTOR * groups.leastFrames) return;
    used[i] = 1;
    pointsByLine[line] += points;
  });
  return { used, pointsByLine, allPointsByLine };
}

/** Share of the trapped points that belong to used tracks. */
export function usedPart({ pointsByLine, allPointsByLine }: UsedTracks): number {
  const sum = (of: Float64Array) => of.reduce((a, b) => a + b, 0);
  return sum(pointsByLine) / sum(allPointsByLine);
}

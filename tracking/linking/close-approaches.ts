import type { SpotTable } from './spot-table';
import type { TrackLinks } from './track-links';

/** Two tracks near each other from frame to frame; each is named by one of its spots. */
export interface CloseApproaches {
  count: number;
  spotA: Int32Array;
  spotB: Int32Array;
  /** First and last frame in which they are near. */
  from: Int32Array;
  to: Int32Array;
}

/** Tracks that part for no longer than this are still in the same approach. */
const APART_FRAMES = 2;

/**
 * Every approach of two tracks to less than `nearPx`. A track counts as present in the frames in
 * which it was missed (on the line between its spots) and for `beyondFrames` before its first
 * and after its last spot (where that was).
 *
 * @returns approaches by first frame, then by the tracks' first spots.
 */
export function closeApproaches(
  table: SpotTable,
  links: TrackLinks,
  nearPx: number,
  beyondFrames: number,
): CloseApproaches {
  const root = roots(links.before);
  const shadows = shadowPoints(table, links, beyondFrames);
  const meetings = new Meetings();
  const near2 = nearPx * nearPx;
  const { xPx, yPx } = table;
  const meet = (a: number, b: number, frame: number) => {
    if (root[a] < root[b]) meetings.add(root[a], root[b], a, b, frame);
    else if (root[b] < root[a]) meetings.add(root[b], root[a], b, a, frame);
  };
  let shadow = 0;
  for (let from = 0, to = 0; from < table.count; from = to) {
    const frame = table.frame[from];
    while (to < table.count && table.frame[to] === frame) to++;
    for (let a = from; a < to; a++) {
      const x = xPx[a];
      const y = yPx[a];
      for (let b = a + 1; b < to && yPx[b] - y < nearPx; b++) {
        const dx = xPx[b] - x;
        const dy = yPx[b] - y;
        if (dx * dx + dy * dy < near2) meet(a, b, frame);
      }
    }
    // Two tracks without a spot here have nothing to be mistaken in: a shadow meets spots only.
    while (shadow < shadows.count && shadows.frame[shadow] < frame) shadow++;
    for (; shadow < shadows.count && shadows.frame[shadow] === frame; shadow++) {
      const x = shadows.xPx[shadow];
      const y = shadows.yPx[shadow];
      for (let b = firstBelow(yPx, from, to, y - nearPx); b < to && yPx[b] - y < nearPx; b++) {
        const dx = xPx[b] - x;
        const dy = yPx[b] - y;
        if (dx * dx + dy * dy < near2) meet(shadows.spot[shadow], b, frame);
      }
    }
  }
  return meetings.approaches(APART_FRAMES);
}

/** First of the spots `from .. to - 1`, which are in order of y, whose y is at least so much. */
function firstBelow(yPx: Float32Array, from: number, to: number, least: number): number {
  let low = from;
  let high = to;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (yPx[middle] < least) low = middle + 1;
    else high = middle;
  }
  return low;
}

/** First spot of the track of each spot. */
function roots(before: Int32Array): Int32Array {
  const root = new Int32Array(before.length);
  for (let s = 0; s < before.length; s++) root[s] = before[s] < 0 ? s : root[before[s]];
  return root;
}

interface Shadows {
  count: number;
  frame: Int32Array;
  xPx: Float64Array;
  yPx: Float64Array;
  spot: Int32Array;
}

/** Where tracks are thought to be in frames in which they have no spot, by frame. */
function shadowPoints(table: SpotTable, links: TrackLinks, beyond: number): Shadows {
  const first = table.count > 0 ? table.frame[0] : 0;
  const last = table.count > 0 ? table.frame[table.count - 1] : 0;
  // Counted first, frame by frame, then written where the counts say.
  const place = new Int32Array(last - first + 2);
  goThroughShadows(table, links, beyond, first, last, place, null);
  for (let f = 1; f < place.length; f++) place[f] += place[f - 1];
  const count = place[place.length - 1];
  const shadows: Shadows = {
    count,
    frame: new Int32Array(count),
    xPx: new Float64Array(count),
    yPx: new Float64Array(count),
    spot: new Int32Array(count),
  };
  goThroughShadows(table, links, beyond, first, last, place, shadows);
  return shadows;
}

/** Counts shadows by frame, one place behind the frame's own; with `out` writes each where the counts say. */
function goThroughShadows(
  table: SpotTable,
  { before, after }: TrackLinks,
  beyond: number,
  first: number,
  last: number,
  place: Int32Array,
  out: Shadows | null,
): void {
  for (let s = 0; s < table.count; s++) {
    const at = table.frame[s];
    const b = before[s];
    const from = b < 0 ? Math.max(first, at - beyond) : table.frame[b] + 1;
    const to = after[s] >= 0 ? at : Math.min(last, at + beyond);
    for (let f = from; f <= to; f++) {
      if (f === at) continue;
      if (out === null) {
        place[f - first + 1]++;
        continue;
      }
      const k = place[f - first]++;
      const inGap = b >= 0 && f < at;
      const share = inGap ? (f - table.frame[b]) / (at - table.frame[b]) : 0;
      const start = inGap ? b : s;
      out.frame[k] = f;
      out.xPx[k] = table.xPx[start] + share * (table.xPx[s] - table.xPx[start]);
      out.yPx[k] = table.yPx[start] + share * (table.yPx[s] - table.yPx[start]);
      out.spot[k] = s;
    }
  }
}

/** Frames in which two tracks are near, collected frame by frame. */
class Meetings {
  private readonly rootA: number[] = [];
  private readonly rootB: number[] = [];
  private readonly spotA: number[] = [];
  private readonly spotB: number[] = [];
  private readonly frame: number[] = [];

  add(rootA: number, rootB: number, spotA: number, spotB: number, frame: number): void {
    this.rootA.push(rootA);
    this.rootB.push(rootB);
    this.spotA.push(spotA);
    this.spotB.push(spotB);
    this.frame.push(frame);
  }

  approaches(apart: number): CloseApproaches {
    const { rootA, rootB, spotA, spotB, frame } = this;
    const order = Uint32Array.from(frame.keys()).sort(
      (a, b) => rootA[a] - rootA[b] || rootB[a] - rootB[b] || frame[a] - frame[b] || a - b,
    );
    const runs: { first: number; to: number }[] = [];
    let previous = -1;
    for (const k of order) {
      const same = previous >= 0 && rootA[k] === rootA[previous] && rootB[k] === rootB[previous];
      if (same && frame[k] - frame[previous] <= apart + 1) runs[runs.length - 1].to = frame[k];
      else runs.push({ first: k, to: frame[k] });
      previous = k;
    }
    runs.sort(
      (a, b) =>
        frame[a.first] - frame[b.first] || rootA[a.first] - rootA[b.first] || rootB[a.first] - rootB[b.first],
    );
    return {
      count: runs.length,
      spotA: Int32Array.from(runs, ({ first }) => spotA[first]),
      spotB: Int32Array.from(runs, ({ first }) => spotB[first]),
      from: Int32Array.from(runs, ({ first }) => frame[first]),
      to: Int32Array.from(runs, ({ to }) => to),
    };
  }
}

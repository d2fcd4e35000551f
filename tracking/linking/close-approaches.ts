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
  const local = new FrameList();
  let shadow = 0;
  let s = 0;
  while (s < table.count || shadow < shadows.frame.length) {
    const frame = Math.min(
      s < table.count ? table.frame[s] : Infinity,
      shadow < shadows.frame.length ? shadows.frame[shadow] : Infinity,
    );
    local.clear();
    for (; s < table.count && table.frame[s] === frame; s++) local.push(table.xPx[s], table.yPx[s], s);
    for (; shadow < shadows.frame.length && shadows.frame[shadow] === frame; shadow++) {
      local.insert(shadows.xPx[shadow], shadows.yPx[shadow], shadows.spot[shadow]);
    }
    for (let i = 0; i < local.count; i++) {
      for (let j = i + 1; j < local.count && local.y[j] - local.y[i] < nearPx; j++) {
        const dx = local.x[j] - local.x[i];
        const dy = local.y[j] - local.y[i];
        if (dx * dx + dy * dy >= nearPx * nearPx) continue;
        const a = local.spot[i];
        const b = local.spot[j];
        if (root[a] < root[b]) meetings.add(root[a], root[b], a, b, frame);
        else if (root[b] < root[a]) meetings.add(root[b], root[a], b, a, frame);
      }
    }
  }
  return meetings.approaches(APART_FRAMES);
}

/** First spot of the track of each spot. */
function roots(before: Int32Array): Int32Array {
  const root = new Int32Array(before.length);
  for (let s = 0; s < before.length; s++) root[s] = before[s] < 0 ? s : root[before[s]];
  return root;
}

interface Shadows {
  frame: ArrayLike<number>;
  xPx: ArrayLike<number>;
  yPx: ArrayLike<number>;
  spot: ArrayLike<number>;
}

/** Where tracks are thought to be in frames in which they have no spot, by frame. */
function shadowPoints(table: SpotTable, { before, after }: TrackLinks, beyond: number): Shadows {
  const last = table.count > 0 ? table.frame[table.count - 1] : 0;
  const frame: number[] = [];
  const xPx: number[] = [];
  const yPx: number[] = [];
  const spot: number[] = [];
  const add = (f: number, x: number, y: number, s: number) => {
    frame.push(f);
    xPx.push(x);
    yPx.push(y);
    spot.push(s);
  };
  for (let s = 0; s < table.count; s++) {
    const at = table.frame[s];
    const b = before[s];
    if (b < 0) {
      for (let f = Math.max(table.frame[0], at - beyond); f < at; f++) add(f, table.xPx[s], table.yPx[s], s);
    } else {
      const gap = at - table.frame[b];
      for (let k = 1; k < gap; k++) {
        const share = k / gap;
        const x = table.xPx[b] + share * (table.xPx[s] - table.xPx[b]);
        add(table.frame[b] + k, x, table.yPx[b] + share * (table.yPx[s] - table.yPx[b]), s);
      }
    }
    if (after[s] >= 0) continue;
    for (let f = at + 1; f <= Math.min(last, at + beyond); f++) add(f, table.xPx[s], table.yPx[s], s);
  }
  const order = Uint32Array.from(frame.keys()).sort((a, b) => frame[a] - frame[b] || a - b);
  return {
    frame: Array.from(order, (k) => frame[k]),
    xPx: Array.from(order, (k) => xPx[k]),
    yPx: Array.from(order, (k) => yPx[k]),
    spot: Array.from(order, (k) => spot[k]),
  };
}

/** Points of one frame by y. */
class FrameList {
  count = 0;
  x = new Float64Array(256);
  y = new Float64Array(256);
  spot = new Int32Array(256);

  clear(): void {
    this.count = 0;
  }

  push(x: number, y: number, spot: number): void {
    if (this.count === this.x.length) {
      for (const name of ['x', 'y'] as const) {
        const wider = new Float64Array(2 * this.count);
        wider.set(this[name]);
        this[name] = wider;
      }
      const wider = new Int32Array(2 * this.count);
      wider.set(this.spot);
      this.spot = wider;
    }
    this.x[this.count] = x;
    this.y[this.count] = y;
    this.spot[this.count++] = spot;
  }

  insert(x: number, y: number, spot: number): void {
    this.push(x, y, spot);
    let at = this.count - 1;
    for (; at > 0 && this.y[at - 1] > y; at--) {
      this.x[at] = this.x[at - 1];
      this.y[at] = this.y[at - 1];
      this.spot[at] = this.spot[at - 1];
    }
    this.x[at] = x;
    this.y[at] = y;
    this.spot[at] = spot;
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

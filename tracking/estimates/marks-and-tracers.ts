import { markedLengthPx, type MarkedFrame } from '../corrections/marked-frames';
import type { PlacePx } from '../corrections/correction';
import type { Tracks } from '../types';

/** A tracer within this many spot sizes of a marked line counts as on it: a hand is hardly steadier. */
const ON_LINE_SPOT_SIZES = 2;

/** What the marks are laid over. */
export interface MarkedRecording {
  tracks: Tracks;
  /** 1 for the tracks that are trapped. */
  trapped: Uint8Array;
  image: { width: number; height: number };
  spotSizePx: number;
}

/** Marked lines, each over all frames in which it was marked. Sums over frames. */
export interface MarkedLines {
  lengthPx: Float64Array;
  /** Trapped tracers on it, less those that stand that near by chance. */
  tracers: Float64Array;
}

/** One mark in one frame. */
interface LaidMark {
  lengthPx: number;
  tracers: number;
  /** Trapped tracks that this mark is the nearest to, of those on it. */
  own: number[];
}

/**
 * Tells which marks of several frames are of one line, and which tracers lie on them. The next mark of a line is
 * the one that most of its tracers which are still there lie on.
 *
 * @param frames in the order of the recording.
 */
export function marksAndTracers(frames: readonly MarkedFrame[], recording: MarkedRecording): MarkedLines {
  const laid = frames.map((frame) => layMarks(frame, recording));
  const marks = laid.flatMap(({ marks: own }) => own);
  const place = new Map(marks.map((mark, i) => [mark, i]));
  const parent = marks.map((_, i) => i);
  const root = (mark: number): number => {
    while (parent[mark] !== mark) mark = parent[mark];
    return mark;
  };
  for (let later = 1; later < laid.length; later++) {
    for (let earlier = 0; earlier < later; earlier++) {
      for (const mark of laid[earlier].marks) {
        const same = mostOf(mark.own, laid[later]);
        if (same) parent[root(place.get(same)!)] = root(place.get(mark)!);
      }
    }
  }
  const lines = new Map<number, { lengthPx: number; tracers: number }>();
  marks.forEach(({ lengthPx, tracers }, i) => {
    const sums = lines.get(root(i)) ?? { lengthPx: 0, tracers: 0 };
    lines.set(root(i), { lengthPx: sums.lengthPx + lengthPx, tracers: sums.tracers + tracers });
  });
  const all = [...lines.values()];
  return {
    lengthPx: Float64Array.from(all, ({ lengthPx }) => lengthPx),
    tracers: Float64Array.from(all, ({ tracers }) => tracers),
  };
}

interface LaidFrame {
  marks: LaidMark[];
  /** The mark of each trapped track that is there in the frame; null for one on none. */
  markOf: Map<number, LaidMark | null>;
}

function layMarks({ frame, lines }: MarkedFrame, recording: MarkedRecording): LaidFrame {
  const { width, height } = recording.image;
  const reachPx = ON_LINE_SPOT_SIZES * recording.spotSizePx;
  const places = trappedIn(frame, recording);
  const marks = lines.map((points): LaidMark => ({ lengthPx: markedLengthPx(points), tracers: 0, own: [] }));
  const markOf = new Map<number, LaidMark | null>();
  let others = 0;
  for (const { track, x, y } of places) {
    let [nearest, nearestPx] = [-1, reachPx];
    lines.forEach((points, i) => {
      const away = distancePx(points, x, y);
      if (away <= nearestPx) [nearest, nearestPx] = [i, away];
    });
    markOf.set(track, marks[nearest] ?? null);
    if (nearest < 0) others++;
    else marks[nearest].own.push(track);
  }
  const areaPx2 = width * height;
  const swathPx2 = marks.reduce((sum, { lengthPx }) => sum + 2 * reachPx * lengthPx, 0);
  // Swaths of marks that cross share their crossing.
  const perPx2 = others / (areaPx2 * Math.exp(-swathPx2 / areaPx2));
  const swathShare = swathPx2 > 0 ? (areaPx2 * -Math.expm1(-swathPx2 / areaPx2)) / swathPx2 : 0;
  for (const mark of marks) {
    mark.tracers = mark.own.length - perPx2 * swathShare * 2 * reachPx * mark.lengthPx;
  }
  return { marks, markOf };
}

/** The mark of another frame on which more than half of the tracks lie that are there; null for none. */
function mostOf(tracks: readonly number[], { markOf }: LaidFrame): LaidMark | null {
  const votes = new Map<LaidMark, number>();
  let there = 0;
  for (const track of tracks) {
    const mark = markOf.get(track);
    if (mark === undefined) continue;
    there++;
    if (mark) votes.set(mark, (votes.get(mark) ?? 0) + 1);
  }
  for (const [mark, count] of votes) if (2 * count > there) return mark;
  return null;
}

function trappedIn(frame: number, { tracks, trapped }: MarkedRecording) {
  const places: { track: number; x: number; y: number }[] = [];
  for (let track = 0; track < tracks.count; track++) {
    if (trapped[track] !== 1) continue;
    const at = tracks.start[track] + frame - tracks.frame[tracks.start[track]];
    if (at < tracks.start[track] || at >= tracks.start[track + 1]) continue;
    places.push({ track, x: tracks.xPx[at], y: tracks.yPx[at] });
  }
  return places;
}

/** Distance of a place from a line through points, px. */
function distancePx(points: readonly PlacePx[], x: number, y: number): number {
  let nearest2 = Infinity;
  for (let k = 1; k < points.length; k++) {
    const [[ax, ay], [bx, by]] = [points[k - 1], points[k]];
    const length2 = (bx - ax) ** 2 + (by - ay) ** 2;
    const along = length2 > 0 ? ((x - ax) * (bx - ax) + (y - ay) * (by - ay)) / length2 : 0;
    const t = Math.max(0, Math.min(1, along));
    nearest2 = Math.min(nearest2, (x - ax - t * (bx - ax)) ** 2 + (y - ay - t * (by - ay)) ** 2);
  }
  return Math.sqrt(nearest2);
}

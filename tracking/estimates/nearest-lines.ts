import { mixSeed } from '../random';
import type { Tracks } from '../types';
import type { LineGroups } from './line-groups';
import { nearPoints } from './near-points';

/** Frames looked at, evenly over the recording: the pattern changes slowly. */
const FRAMES_MAX = 40;
/** Nearest distances between different lines, summed by line, so that lines can be resampled. */
export interface NearestLines {
  /** Distances that end at a neighbour, not at the edge of the image. */
  ended: Float64Array;
  /** Sum of pi min(distance, distance to the edge)^2, m^2. */
  areaM2: Float64Array;
  /** Share of the frames looked at in which a line is seen. */
  present: Float64Array;
  /** Lines per frame: the sum of the shares. */
  linesPerFrame: number;
  /**
   * Lines that are seen no further apart than lines typically are, each pair once: what is measured of
   * them depends on each other, since a distance between two is often the nearest one of both.
   */
  neighbours: [lineA: number, lineB: number][];
}

/**
 * In frames over the whole recording one tracer stands for each line; its distance to the nearest
 * one of another line is measured, and cut off at the edge of the image, beyond which a nearer one
 * may lie. For points scattered at random the area pi r^2 is exponential, so their number per area
 * is ended distances over summed areas, whatever is cut off.
 *
 * @param used 1 for tracks that are long enough to be joined to their lines.
 */
export function nearestLines(
  tracks: Tracks,
  used: Uint8Array,
  groups: LineGroups,
  image: { width: number; height: number; frames: number },
  pixelSizeM: number,
): NearestLines {
  const ended = new Float64Array(groups.lines);
  const areaM2 = new Float64Array(groups.lines);
  const step = Math.max(1, Math.floor(image.frames / FRAMES_MAX));
  const present = new Float64Array(groups.lines);
  const neighbours = new Map<number, [number, number]>();
  let frames = 0;
  for (let frame = Math.floor(step / 2); frame < image.frames; frame += step) {
    const { line, x, y } = representatives(tracks, used, groups, frame);
    frames++;
    const nearest = nearestDistances(x, y, image);
    const typicalPx = Math.sqrt((image.width * image.height) / Math.max(1, line.length));
    for (const { i, j } of nearPoints(x, y, typicalPx)) {
      const [a, b] = line[i] < line[j] ? [line[i], line[j]] : [line[j], line[i]];
      neighbours.set(a * groups.lines + b, [a, b]);
    }
    for (let i = 0; i < line.length; i++) {
      present[line[i]]++;
      const edge = Math.min(x[i], y[i], image.width - 1 - x[i], image.height - 1 - y[i]) + 0.5;
      if (nearest[i] <= edge) ended[line[i]]++;
      areaM2[line[i]] += Math.PI * (Math.max(0, Math.min(nearest[i], edge)) * pixelSizeM) ** 2;
    }
  }
  for (let i = 0; i < groups.lines; i++) present[i] /= Math.max(1, frames);
  return {
    ended,
    areaM2,
    present,
    linesPerFrame: present.reduce((a, b) => a + b, 0),
    neighbours: [...neighbours.values()],
  };
}

/** One tracer per line: the one of those present that a fixed lottery puts first. */
function representatives(tracks: Tracks, used: Uint8Array, groups: LineGroups, frame: number) {
  const best = new Map<number, { lot: number; x: number; y: number }>();
  for (let i = 0; i < tracks.count; i++) {
    if (used[i] !== 1) continue;
    const first = tracks.frame[tracks.start[i]];
    const at = tracks.start[i] + frame - first;
    if (frame < first || at >= tracks.start[i + 1]) continue;
    const lot = mixSeed(17, i) >>> 0;
    const known = best.get(groups.line[i]);
    if (!known || lot < known.lot) best.set(groups.line[i], { lot, x: tracks.xPx[at], y: tracks.yPx[at] });
  }
  const list = [...best];
  return {
    line: list.map(([line]) => line),
    x: list.map(([, at]) => at.x),
    y: list.map(([, at]) => at.y),
  };
}

/** Distance of every point to its nearest other one; Infinity for a single point. Cells of about one point each. */
export function nearestDistances(
  x: readonly number[],
  y: readonly number[],
  image: { width: number; height: number },
): Float64Array {
  const n = x.length;
  const cell = Math.max(1, Math.sqrt((image.width * image.height) / Math.max(1, n)));
  const columns = Math.ceil(image.width / cell) + 1;
  const rows = Math.ceil(image.height / cell) + 1;
  const head = new Int32Array(columns * rows).fill(-1);
  const next = new Int32Array(n);
  const columnOf = (i: number) => Math.max(0, Math.min(columns - 1, Math.floor((x[i] + 0.5) / cell)));
  const rowOf = (i: number) => Math.max(0, Math.min(rows - 1, Math.floor((y[i] + 0.5) / cell)));
  for (let i = 0; i < n; i++) {
    const at = rowOf(i) * columns + columnOf(i);
    next[i] = head[at];
    head[at] = i;
  }
  const out = new Float64Array(n).fill(Infinity);
  const rings = Math.max(columns, rows);
  for (let i = 0; i < n; i++) {
    const column = columnOf(i);
    const row = rowOf(i);
    // Cells of ring k are at least (k - 1) cells away, so one more ring settles it.
    for (let ring = 0; ring <= rings && (ring - 1) * cell <= out[i]; ring++) {
      for (let r = row - ring; r <= row + ring; r++) {
        if (r < 0 || r >= rows) continue;
        const wholeRow = Math.abs(r - row) === ring;
        for (let c = column - ring; c <= column + ring; c += wholeRow || ring === 0 ? 1 : 2 * ring) {
          if (c < 0 || c >= columns) continue;
          for (let j = head[r * columns + c]; j >= 0; j = next[j]) {
            if (j !== i) out[i] = Math.min(out[i], Math.hypot(x[i] - x[j], y[i] - y[j]));
          }
        }
      }
    }
  }
  return out;
}

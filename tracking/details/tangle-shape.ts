import type { EstimateContext } from '../estimates/context';
import { ClusteredRatios } from '../resampling/clustered-ratios';
import { unitFlow } from '../velocities';
import { fitCircle } from './fit-circle';

/** Shape of the lines as far as tracers on one line show it, in projection. Plain JSON. */
export interface TangleShape {
  /** Lines with two tracers or more in a frame that was looked at, and with five or more. */
  chains: number;
  longChains: number;
  /** Projected length between neighbouring tracers per frame, m, and per area of the sheet, m^-1. */
  lengthM: number;
  lengthPerAreaM: number;
  /** Mean distance between neighbouring tracers of a line, m. */
  spacingM: number | null;
  /**
   * <cos 2 theta> of the projected directions against the flow (against x without one): 0 without a
   * preference, 1 along, -1 across. 95 % interval over lines.
   */
  order: { value: number; low: number; high: number } | null;
  /** Mean and r.m.s. projected curvature of long chains, 1/m, straighter ones left out as 0. */
  curvature: { meanPerM: number; rmsPerM: number; chains: number; straight: number } | null;
  note: string;
}

/** Frames looked at, evenly over the recording: lines change little from one to the next. */
const FRAMES_MOST = 12;
/** Neighbours nearer than this many spot sizes have no direction to speak of. */
const DISTANCE_SPOT_SIZES = 4;
/** Tracers that a circle is fitted to, at least. */
const CIRCLE_LEAST = 5;
/** A radius beyond this many spacings can't be told from a straight line. */
const STRAIGHT_SPACINGS = 10;
const CAVEAT =
  'Everything is seen in projection: lines that run through the sheet show short and straight pieces, directions are those in the image plane, and curvature out of it is missed.';

/**
 * Joins the tracers of each line in their order along it (their main axis) and measures the chain that
 * they make: its length, its directions against the flow (the two-dimensional order parameter) and its
 * curvature by circles through all tracers of it.
 *
 * @returns null where tracers can't be told to share a line.
 */
export function tangleShape(context: EstimateContext): TangleShape | null {
  const { tracks, groups, image, conditions, pool, recipe } = context;
  if (!groups.told) return null;
  const members = new Map<number, number[]>();
  groups.line.forEach((line, track) => {
    if (line >= 0) members.set(line, [...(members.get(line) ?? []), track]);
  });
  const flow = unitFlow(conditions) ?? [1, 0];
  const px = conditions.pixelSize_m;
  const leastPx = DISTANCE_SPOT_SIZES * recipe.spotSizePx;
  const step = Math.max(1, Math.floor(image.frames / FRAMES_MOST));
  const frames: number[] = [];
  for (let f = Math.floor(step / 2); f < image.frames; f += step) frames.push(f);

  const order = new ClusteredRatios(1);
  const [lines, long] = [new Set<number>(), new Set<number>()];
  let [length, gaps, distances] = [0, 0, 0];
  const curvatures = new Map<number, number[]>();
  for (const [line, own] of members) {
    if (own.length < 2) continue;
    let [turned, total] = [0, 0];
    for (const frame of frames) {
      const chain = inOrder(pointsAt(context, own, frame));
      if (chain.length < 2) continue;
      lines.add(line);
      for (let k = 1; k < chain.length; k++) {
        const dx = chain[k].x - chain[k - 1].x;
        const dy = chain[k].y - chain[k - 1].y;
        const d = Math.hypot(dx, dy);
        length += d;
        distances += d;
        gaps++;
        if (d < leastPx) continue;
        const along = dx * flow[0] + dy * flow[1];
        turned += d * ((2 * along * along) / (d * d) - 1);
        total += d;
      }
      if (chain.length < CIRCLE_LEAST) continue;
      long.add(line);
      const spacing = chainLength(chain) / (chain.length - 1);
      const radius = fitCircle(chain.map(({ x, y }) => [x, y]));
      const bent = radius !== null && radius < STRAIGHT_SPACINGS * spacing;
      curvatures.set(line, [...(curvatures.get(line) ?? []), bent ? 1 / (radius * px) : 0]);
    }
    if (total > 0) order.add([turned], [total]);
  }
  if (lines.size === 0) return null;
  const found = order.ratio(0);
  // One value for each line: the mean over its frames.
  const perLine = [...curvatures.values()].map((list) => list.reduce((a, b) => a + b, 0) / list.length);
  return {
    chains: lines.size,
    longChains: long.size,
    lengthM: (length * px) / frames.length,
    lengthPerAreaM: (length * px) / frames.length / pool.areaM2,
    spacingM: gaps > 0 ? (distances / gaps) * px : null,
    order:
      found.low === null || found.high === null
        ? null
        : { value: found.value, low: Math.max(-1, found.low), high: Math.min(1, found.high) },
    curvature:
      perLine.length < 3
        ? null
        : {
            meanPerM: perLine.reduce((a, b) => a + b, 0) / perLine.length,
            rmsPerM: Math.sqrt(perLine.reduce((a, b) => a + b * b, 0) / perLine.length),
            chains: perLine.length,
            straight: perLine.filter((c) => c === 0).length,
          },
    note: CAVEAT,
  };

  function pointsAt({ tracks: all }: EstimateContext, own: readonly number[], frame: number) {
    return own.flatMap((track) => {
      const at = all.start[track] + frame - all.frame[all.start[track]];
      const there = at >= all.start[track] && at < all.start[track + 1];
      return there ? [{ x: tracks.xPx[at], y: tracks.yPx[at] }] : [];
    });
  }
}

interface Place {
  x: number;
  y: number;
}

/** Points in order along their main axis (the eigenvector of their scatter). */
export function inOrder(points: readonly Place[]): Place[] {
  const n = points.length;
  const mx = points.reduce((sum, p) => sum + p.x, 0) / n;
  const my = points.reduce((sum, p) => sum + p.y, 0) / n;
  let [xx, xy, yy] = [0, 0, 0];
  for (const { x, y } of points) {
    xx += (x - mx) ** 2;
    xy += (x - mx) * (y - my);
    yy += (y - my) ** 2;
  }
  const angle = 0.5 * Math.atan2(2 * xy, xx - yy);
  const place = ({ x, y }: Place) => (x - mx) * Math.cos(angle) + (y - my) * Math.sin(angle);
  return [...points].sort((a, b) => place(a) - place(b));
}

function chainLength(chain: readonly Place[]): number {
  let sum = 0;
  for (let k = 1; k < chain.length; k++)
    sum += Math.hypot(chain[k].x - chain[k - 1].x, chain[k].y - chain[k - 1].y);
  return sum;
}

import { kdTree } from 'kd-tree-javascript';
import { trailAt, type TrackBlock } from './track-block';

interface PickPoint {
  x: number;
  y: number;
  /** Index of the track in its block. */
  index: number;
}

/** Finds the track nearest to a place of the image. */
export interface TrackPicker {
  /** Index in the block of the nearest track within `reachPx` image px, or -1. */
  nearest(x: number, y: number, reachPx: number): number;
}

const squaredDistance = (a: PickPoint, b: PickPoint) => (a.x - b.x) ** 2 + (a.y - b.y) ** 2;

/**
 * A picker for what is drawn at a frame. Newest points are all in it, older ones every other, which
 * is closer than anyone can point.
 */
export function createTrackPicker(block: TrackBlock, frame: number, trailFrames: number): TrackPicker {
  const points: PickPoint[] = [];
  const trail = { first: 0, last: 0 };
  for (let index = 0; index < block.count; index += 1) {
    if (!trailAt(block, index, frame, trailFrames, trail)) continue;
    for (let k = trail.last; k >= trail.first; k -= 2) points.push({ x: block.x[k], y: block.y[k], index });
  }
  const tree = new kdTree<PickPoint>(points, squaredDistance, ['x', 'y']);
  return {
    nearest(x, y, reachPx) {
      if (points.length === 0) return -1;
      const found = tree.nearest({ x, y, index: -1 }, 1, reachPx ** 2);
      return found.length > 0 ? found[0][0].index : -1;
    },
  };
}

import { trailAt, type TrackBlock } from '@/components/canvas/track-block';
import type { Point } from '@/components/canvas/view-box';

interface Stop {
  track: number;
  distancePx: number;
}

/**
 * Goes from track to track by keys, nearest first, counted from where the walk began. It begins anew
 * when the frame changes or a track was chosen by other means.
 */
export class TrackWalk {
  private stops: Stop[] = [];
  private at = -1;
  private frame = -1;
  private block: TrackBlock | null = null;

  /**
   * The track after (1) or before (-1) the chosen one; null when none is in the frame.
   * @param middle where a walk begins when no track is chosen, px of the image.
   */
  step(
    block: TrackBlock,
    frame: number,
    chosen: number | null,
    middle: Point,
    direction: 1 | -1,
  ): number | null {
    const same =
      this.block === block && this.frame === frame && this.at >= 0 && this.stops[this.at]?.track === chosen;
    if (!same) this.begin(block, frame, chosen, middle);
    if (this.stops.length === 0) return null;
    const n = this.stops.length;
    this.at = this.at < 0 ? (direction === 1 ? 0 : n - 1) : (this.at + direction + n) % n;
    return this.stops[this.at].track;
  }

  private begin(block: TrackBlock, frame: number, chosen: number | null, middle: Point): void {
    const trail = { first: 0, last: 0 };
    const places: { track: number; x: number; y: number }[] = [];
    for (let i = 0; i < block.count; i += 1) {
      if (!trailAt(block, i, frame, 1, trail)) continue;
      places.push({ track: block.track[i], x: block.x[trail.last], y: block.y[trail.last] });
    }
    const from = places.find(({ track }) => track === chosen) ?? middle;
    this.stops = places
      .map(({ track, x, y }) => ({ track, distancePx: Math.hypot(x - from.x, y - from.y) }))
      .sort((a, b) => a.distancePx - b.distancePx || a.track - b.track);
    this.at = this.stops.findIndex(({ track }) => track === chosen);
    this.block = block;
    this.frame = frame;
  }
}

/** Points in time, in any order; entry i of every array is one point. */
export interface TimedPoints {
  frame: ArrayLike<number>;
  xPx: ArrayLike<number>;
  yPx: ArrayLike<number>;
}

/** The points of each frame in order of x: those of frame f are entries `start[f] .. start[f + 1] - 1`. */
export interface FrameOrder {
  /** Length frames + 1. */
  start: Uint32Array;
  /** Number of the point. */
  point: Uint32Array;
  xPx: Float64Array;
  yPx: Float64Array;
}

/** Sorts points by frame, then x, then number; those after the last frame are left out. */
export function orderByFrame(points: TimedPoints, frames: number): FrameOrder {
  const start = new Uint32Array(frames + 1);
  for (let i = 0; i < points.frame.length; i++) if (points.frame[i] < frames) start[points.frame[i] + 1]++;
  for (let f = 0; f < frames; f++) start[f + 1] += start[f];
  const point = new Uint32Array(start[frames]);
  const next = start.slice();
  for (let i = 0; i < points.frame.length; i++) {
    if (points.frame[i] < frames) point[next[points.frame[i]]++] = i;
  }
  for (let f = 0; f < frames; f++) {
    point.subarray(start[f], start[f + 1]).sort((a, b) => points.xPx[a] - points.xPx[b] || a - b);
  }
  return {
    start,
    point,
    xPx: Float64Array.from(point, (i) => points.xPx[i]),
    yPx: Float64Array.from(point, (i) => points.yPx[i]),
  };
}

/** First entry of a frame whose x is not below `leastPx`; the frame's end where there is none. */
export function firstFrom({ start, xPx }: FrameOrder, frame: number, leastPx: number): number {
  let low = start[frame];
  let high = start[frame + 1];
  while (low < high) {
    const middle = (low + high) >> 1;
    if (xPx[middle] < leastPx) low = middle + 1;
    else high = middle;
  }
  return low;
}

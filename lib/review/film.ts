/** A run of frames around a meeting, each cut to the same square of whole camera pixels. */
export interface Film {
  firstFrame: number;
  frames: number;
  /** The frame nearest to closest approach. */
  middleFrame: number;
  leftPx: number;
  topPx: number;
  /** Side of the square, px. */
  sizePx: number;
  /** The squares lie in rows of this many in the picture. */
  columns: number;
}

/** Positions of one track, frame by frame. */
export interface FilmPath {
  frame: ArrayLike<number>;
  x: ArrayLike<number>;
  y: ArrayLike<number>;
}

/** Frames shown before and after the meeting. */
const REACH_FRAMES = 12;
const COLUMNS = 5;
/** Half the square: room for the spots and what is around them, and no more than the eye can take in. */
const HALF_LEAST_PX = 14;
const HALF_MOST_PX = 44;
const MARGIN_PX = 6;

export interface FilmRequest {
  /** Time of closest approach in frames, and the place, px. */
  meetingFrame: number;
  xPx: number;
  yPx: number;
  paths: readonly FilmPath[];
  image: { frames: number; width: number; height: number };
}

/**
 * The cut that holds both tracks while they are on film: as small as their paths allow, inside the image, and of at
 * most a fixed size, so that long partings run out of it.
 */
export function filmOf({ meetingFrame, xPx, yPx, paths, image }: FilmRequest): Film {
  const middleFrame = clamp(Math.round(meetingFrame), 0, image.frames - 1);
  const firstFrame = Math.max(0, middleFrame - REACH_FRAMES);
  const lastFrame = Math.min(image.frames - 1, middleFrame + REACH_FRAMES);
  let half = HALF_LEAST_PX;
  for (const { frame, x, y } of paths) {
    for (let i = 0; i < frame.length; i++) {
      if (frame[i] < firstFrame || frame[i] > lastFrame) continue;
      half = Math.max(half, Math.abs(x[i] - xPx) + MARGIN_PX, Math.abs(y[i] - yPx) + MARGIN_PX);
    }
  }
  half = Math.min(HALF_MOST_PX, Math.ceil(half));
  const sizePx = Math.min(2 * half + 1, image.width, image.height);
  const start = (centre: number, length: number) =>
    clamp(Math.round(centre) - (sizePx >> 1), 0, length - sizePx);
  return {
    firstFrame,
    frames: lastFrame - firstFrame + 1,
    middleFrame,
    leftPx: start(xPx, image.width),
    topPx: start(yPx, image.height),
    sizePx,
    columns: COLUMNS,
  };
}

/** Rows of squares in the picture of a film. */
export const filmRows = ({ frames, columns }: Film): number => Math.ceil(frames / columns);

/** Frames of the strip: at most nine, evenly about the meeting, all of the film. */
export function stripFrames({ firstFrame, frames, middleFrame }: Film, step = 3, most = 9): number[] {
  const last = firstFrame + frames - 1;
  const list: number[] = [];
  for (let k = -(most >> 1); k <= most >> 1; k++) {
    const frame = middleFrame + k * step;
    if (frame >= firstFrame && frame <= last) list.push(frame);
  }
  return list;
}

const clamp = (value: number, least: number, most: number) => Math.max(least, Math.min(most, value));

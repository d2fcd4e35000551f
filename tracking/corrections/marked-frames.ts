import { CorrectionRefusal, isMark, type LoggedCorrection, type Mark, type PlacePx } from './correction';

/** Points of a marked line, at most: more are no line that a person drew. */
export const MARK_POINTS_MOST = 200;
/** A marked line shorter than this has no length to speak of, px. */
const MARK_LENGTH_LEAST_PX = 1;

/** The lines that people marked in one frame. */
export interface MarkedFrame {
  frame: number;
  /** Through their points, in the order in which they were marked. */
  lines: readonly (readonly PlacePx[])[];
  /** Somebody said that these are all that can be seen in the frame. */
  complete: boolean;
}

/** Length of a marked line in the image, px. */
export function markedLengthPx(points: readonly PlacePx[]): number {
  let length = 0;
  for (let k = 1; k < points.length; k++) {
    length += Math.hypot(points[k][0] - points[k - 1][0], points[k][1] - points[k - 1][1]);
  }
  return length;
}

/** @throws CorrectionRefusal for a mark outside the recording, or one that is no line */
export function assertMark(
  mark: Mark,
  { width, height, frames }: { width: number; height: number; frames: number },
): void {
  if (mark.frame >= frames) {
    throw new CorrectionRefusal(
      `The recording has frames 0 to ${frames - 1}. Received ${mark.frame}.`,
      'frame',
    );
  }
  if (mark.kind === 'complete-frame') return;
  const outside = mark.points.findIndex(
    ([x, y]) => !(x >= -0.5 && x < width - 0.5 && y >= -0.5 && y < height - 0.5),
  );
  if (outside >= 0) {
    throw new CorrectionRefusal(
      `Point ${outside + 1} of the line lies outside the image of ${width} x ${height} px.`,
      `points.${outside}`,
    );
  }
  if (!(markedLengthPx(mark.points) >= MARK_LENGTH_LEAST_PX)) {
    throw new CorrectionRefusal(`A marked line is at least ${MARK_LENGTH_LEAST_PX} px long.`, 'points');
  }
}

/**
 * Frames with marks that are in force, in the order of the recording. Marks of several people in one frame are
 * marks of one picture: each sees what the others drew.
 *
 * @param active which corrections of the log are in force, as `inForce` tells.
 */
export function markedFrames(log: readonly LoggedCorrection[], active: Uint8Array): MarkedFrame[] {
  const found = new Map<number, { lines: PlacePx[][]; complete: boolean }>();
  log.forEach((correction, place) => {
    if (active[place] === 0 || !isMark(correction)) return;
    const frame = found.get(correction.frame) ?? { lines: [], complete: false };
    if (correction.kind === 'mark-line') frame.lines.push(correction.points);
    else frame.complete = true;
    found.set(correction.frame, frame);
  });
  return Array.from(found, ([frame, marks]) => ({ frame, ...marks })).sort((a, b) => a.frame - b.frame);
}

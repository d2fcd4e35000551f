import type { LinePiece } from './isotropic-lines';

/** A line and how far it has moved by every frame, m. */
export interface MovingLine {
  line: LinePiece;
  shift: [Float64Array, Float64Array, Float64Array];
  /** Longest way that it goes between two frames, m. */
  longestStepM: number;
}

/** Longest way between two frames, m. */
export function longestStep(path: readonly Float64Array[]): number {
  let most = 0;
  for (let k = 1; k < path[0].length; k++) {
    most = Math.max(most, Math.hypot(...path.map((of) => of[k] - of[k - 1])));
  }
  return most;
}

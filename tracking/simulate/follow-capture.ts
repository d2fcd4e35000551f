import { longestStep, type MovingLine } from './moving-line';

/** Steps between two frames in which a tracer and the lines move on straight ways. */
const STEPS = 4;

/**
 * Lets the first line that comes within a distance of a tracer take it along from then on. A line that is
 * far away is looked at again when it can have come near.
 *
 * @param path x, y, z of the tracer in every frame, m; changed from the capture on.
 * @returns the first frame in which it is caught, or null.
 */
export function followCapture(
  path: readonly Float64Array[],
  lines: readonly MovingLine[],
  radiusM: number,
): number | null {
  if (!(radiusM > 0) || lines.length === 0) return null;
  const frames = path[0].length;
  const ownStep = longestStep(path);
  const from = new Int32Array(lines.length).fill(1);
  for (let k = 1; k < frames; k++) {
    for (let s = 1; s <= STEPS; s++) {
      const part = s / STEPS;
      const between = (of: Float64Array) => of[k - 1] + part * (of[k] - of[k - 1]);
      for (let l = 0; l < lines.length; l++) {
        if (from[l] > k) continue;
        const { line, shift } = lines[l];
        // From a point of the line to the tracer, and what of it lies across the line.
        let along = 0;
        let square = 0;
        for (let a = 0; a < 3; a++) {
          const d = between(path[a]) - line.point[a] - between(shift[a]);
          along += d * line.direction[a];
          square += d * d;
        }
        const away = Math.sqrt(Math.max(0, square - along * along)) - radiusM;
        if (away > 0) {
          from[l] = k + Math.floor(away / (ownStep + lines[l].longestStepM));
          continue;
        }
        if (along < line.from || along > line.to) continue;
        for (let a = 0; a < 3; a++) {
          const at = between(path[a]);
          const moved = between(shift[a]);
          for (let j = k; j < frames; j++) path[a][j] = at + shift[a][j] - moved;
        }
        return k;
      }
    }
  }
  return null;
}

import { BEAD_STEP_PX, TAPER_HEAD_PX, TAPER_TAIL_PX } from './stroke-style';

/** The part of a drawing context that paths need; tests record it. */
export interface PathSink {
  moveTo(x: number, y: number): void;
  lineTo(x: number, y: number): void;
  closePath(): void;
}

/** A polyline on the screen: `x[i], y[i]` for `i < length`. */
export interface ScreenLine {
  length: number;
  x: Float32Array;
  y: Float32Array;
}

export const createScreenLine = (capacity: number): ScreenLine => ({
  length: 0,
  x: new Float32Array(capacity),
  y: new Float32Array(capacity),
});

/** Adds the line as an open path. */
export function linePath(sink: PathSink, line: ScreenLine): void {
  sink.moveTo(line.x[0], line.y[0]);
  // A single point still shows as a dot of the stroke's width.
  if (line.length === 1) sink.lineTo(line.x[0] + 0.01, line.y[0]);
  for (let i = 1; i < line.length; i += 1) sink.lineTo(line.x[i], line.y[i]);
}

/**
 * Adds a closed shape along the line that widens from the oldest point to the newest.
 *
 * @param extraPx added all round: the casing is the same shape grown by it.
 */
export function taperPath(sink: PathSink, line: ScreenLine, extraPx: number, scale = 1): void {
  const n = line.length - 1;
  if (n < 1) return dotPath(sink, line.x[0], line.y[0], (TAPER_HEAD_PX / 2) * scale + extraPx);
  const half = (i: number) =>
    ((TAPER_TAIL_PX + ((TAPER_HEAD_PX - TAPER_TAIL_PX) * i) / n) / 2) * scale + extraPx;
  const [sx, sy] = direction(line, 0);
  const [ex, ey] = direction(line, n);
  sink.moveTo(line.x[0] - sx * extraPx, line.y[0] - sy * extraPx);
  for (let i = 0; i <= n; i += 1) {
    const [ux, uy] = direction(line, i);
    sink.lineTo(line.x[i] - uy * half(i), line.y[i] + ux * half(i));
  }
  sink.lineTo(line.x[n] + ex * (extraPx + scale), line.y[n] + ey * (extraPx + scale));
  for (let i = n; i >= 0; i -= 1) {
    const [ux, uy] = direction(line, i);
    sink.lineTo(line.x[i] + uy * half(i), line.y[i] - ux * half(i));
  }
  sink.closePath();
}

function dotPath(sink: PathSink, x: number, y: number, r: number): void {
  sink.moveTo(x + r, y);
  for (let k = 1; k < 8; k += 1) {
    sink.lineTo(x + r * Math.cos((k * Math.PI) / 4), y + r * Math.sin((k * Math.PI) / 4));
  }
  sink.closePath();
}

/** Unit vector along the line at point `i`, from its neighbours; along x where they coincide. */
function direction(line: ScreenLine, i: number): [number, number] {
  const a = Math.max(0, i - 1);
  const b = Math.min(line.length - 1, i + 1);
  const dx = line.x[b] - line.x[a];
  const dy = line.y[b] - line.y[a];
  const length = Math.hypot(dx, dy);
  return length > 1e-6 ? [dx / length, dy / length] : [1, 0];
}

/**
 * Places beads along the line, one every `BEAD_STEP_PX` counted back from the newest point, which
 * always carries one: so the bead sits on the tracer and the others trail behind.
 */
export function placeBeads(line: ScreenLine, scale: number, place: (x: number, y: number) => void): void {
  const step = BEAD_STEP_PX * scale;
  let due = 0;
  for (let i = line.length - 1; i > 0; i -= 1) {
    const dx = line.x[i - 1] - line.x[i];
    const dy = line.y[i - 1] - line.y[i];
    const length = Math.hypot(dx, dy);
    while (due <= length) {
      const share = length > 0 ? due / length : 0;
      place(line.x[i] + dx * share, line.y[i] + dy * share);
      due += step;
      if (length === 0) break;
    }
    due -= length;
  }
  if (line.length === 1) place(line.x[0], line.y[0]);
}

import { BEAD_STEP_PX, TAPER_HEAD_PX, TAPER_TAIL_PX } from './stroke-style';

/** The part of a drawing context that paths need; tests record it. */
export interface PathSink {
  moveTo(x: number, y: number): void;
  lineTo(x: number, y: number): void;
  closePath(): void;
}

/** A polyline on the screen: points `from .. to - 1` of flat lists. */
export interface ScreenLine {
  x: Float32Array;
  y: Float32Array;
  from: number;
  to: number;
}

/** Adds the line as an open path. */
export function linePath(sink: PathSink, { x, y, from, to }: ScreenLine): void {
  sink.moveTo(x[from], y[from]);
  // A single point still shows as a dot of the stroke's width.
  if (to - from === 1) sink.lineTo(x[from] + 0.01, y[from]);
  for (let i = from + 1; i < to; i += 1) sink.lineTo(x[i], y[i]);
}

/**
 * Adds a closed shape along the line that widens from the oldest point to the newest.
 *
 * @param extraPx added all round: the casing is the same shape grown by it.
 */
export function taperPath(sink: PathSink, line: ScreenLine, extraPx: number): void {
  const { x, y, from, to } = line;
  const last = to - 1;
  if (last <= from) return dotPath(sink, x[from], y[from], TAPER_HEAD_PX / 2 + extraPx);
  const grow = (TAPER_HEAD_PX - TAPER_TAIL_PX) / (last - from);
  const half = (i: number) => (TAPER_TAIL_PX + grow * (i - from)) / 2 + extraPx;
  setDirection(line, from);
  sink.moveTo(x[from] - ux * extraPx, y[from] - uy * extraPx);
  for (let i = from; i <= last; i += 1) {
    setDirection(line, i);
    sink.lineTo(x[i] - uy * half(i), y[i] + ux * half(i));
  }
  sink.lineTo(x[last] + ux * (extraPx + 1), y[last] + uy * (extraPx + 1));
  for (let i = last; i >= from; i -= 1) {
    setDirection(line, i);
    sink.lineTo(x[i] + uy * half(i), y[i] - ux * half(i));
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

// Written by `setDirection`: a pair made anew for each of a hundred thousand points a second would
// be as many things to collect.
let ux = 1;
let uy = 0;

/** Unit vector along the line at point `i`, from its neighbours; along x where they coincide. */
function setDirection({ x, y, from, to }: ScreenLine, i: number): void {
  const a = i > from ? i - 1 : i;
  const b = i < to - 1 ? i + 1 : i;
  const dx = x[b] - x[a];
  const dy = y[b] - y[a];
  const length = Math.sqrt(dx * dx + dy * dy);
  ux = length > 1e-6 ? dx / length : 1;
  uy = length > 1e-6 ? dy / length : 0;
}

/**
 * Places beads along the line, one every `BEAD_STEP_PX` counted back from the newest point, which
 * always carries one: so the bead sits on the tracer and the others trail behind.
 */
export function placeBeads({ x, y, from, to }: ScreenLine, place: (x: number, y: number) => void): void {
  place(x[to - 1], y[to - 1]);
  let due = BEAD_STEP_PX;
  for (let i = to - 1; i > from; i -= 1) {
    const dx = x[i - 1] - x[i];
    const dy = y[i - 1] - y[i];
    const length = Math.sqrt(dx * dx + dy * dy);
    for (; due <= length; due += BEAD_STEP_PX) place(x[i] + (dx * due) / length, y[i] + (dy * due) / length);
    due -= length;
  }
}

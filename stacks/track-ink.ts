import { inkDisc, inkLine, type Canvas, type Colour } from './ink';

// The strokes of the look, as on the screens: shape tells the population, colour only repeats it.

const COLOURS: Record<'trapped' | 'free' | 'undecided', Colour> = {
  trapped: [0xff, 0xbf, 0x3f],
  free: [0x57, 0xb2, 0x9b],
  undecided: [0xdd, 0xea, 0xee],
};
const CASING: Colour = [6, 9, 11];
const CASING_OPACITY = 0.78;
/** Half of what a casing is wider than its stroke, px. */
const CASING_HALF = 1.2;
const THREAD_HALF = 0.55;
const BEAD_RADIUS = 2.1;
const BEAD_STEP_PX = 7;
const TAPER_HALF = { tail: 0.25, head: 1.6 };
const DASH_HALF = 0.65;
const DASH_PX = 4;
const GAP_PX = 3.5;

/** A path on the picture, oldest point first. */
export interface InkPath {
  /** Code of the population: 0 trapped, 1 free, else undecided. */
  population: number | null;
  points: readonly { x: number; y: number; bridged: boolean }[];
}

type Point = readonly [number, number];

/** Draws a track as far as it has come. Draw all casings of a picture before all strokes. */
export function inkTrack(canvas: Canvas, { population, points }: InkPath, layer: 'casing' | 'stroke'): void {
  if (points.length === 0) return;
  const line = points.map(({ x, y }): Point => [x, y]);
  const casing = layer === 'casing';
  const grow = casing ? CASING_HALF : 0;
  const ink = (colour: Colour) =>
    casing ? { colour: CASING, opacity: CASING_OPACITY } : { colour, opacity: 1 };
  if (population === 0) {
    const thread = casing ? BEAD_RADIUS : THREAD_HALF;
    eachSegment(line, (a, b) =>
      inkLine(canvas, a, b, even(thread + (casing ? 0.6 : 0)), ink(COLOURS.trapped)),
    );
    if (casing) return;
    for (const bead of beadsOf(points)) inkDisc(canvas, bead, BEAD_RADIUS, ink(COLOURS.trapped));
  } else if (population === 1) {
    const last = Math.max(1, line.length - 1);
    const half = (i: number) => TAPER_HALF.tail + ((TAPER_HALF.head - TAPER_HALF.tail) * i) / last + grow;
    eachSegment(line, (a, b, i) =>
      inkLine(canvas, a, b, { from: half(i), to: half(i + 1) }, ink(COLOURS.free)),
    );
  } else if (casing) {
    eachSegment(line, (a, b) => inkLine(canvas, a, b, even(DASH_HALF + grow), ink(CASING)));
  } else eachDash(line, (a, b) => inkLine(canvas, a, b, even(DASH_HALF), ink(COLOURS.undecided)));
}

/** Measured positions that carry a bead: the newest, and others so far apart that beads stay beads. */
function beadsOf(points: InkPath['points']): Point[] {
  const beads: Point[] = [];
  for (let i = points.length - 1; i >= 0; i--) {
    const { x, y, bridged } = points[i];
    const last = beads.at(-1);
    if (bridged || (last && Math.hypot(x - last[0], y - last[1]) < BEAD_STEP_PX)) continue;
    beads.push([x, y]);
  }
  return beads;
}

const even = (half: number) => ({ from: half, to: half });

function eachSegment(line: readonly Point[], draw: (a: Point, b: Point, i: number) => void): void {
  if (line.length === 1) draw(line[0], line[0], 0);
  for (let i = 0; i + 1 < line.length; i++) draw(line[i], line[i + 1], i);
}

/** Dashes counted along the whole line, so that they don't begin anew at each point. */
function eachDash(line: readonly Point[], draw: (a: Point, b: Point) => void): void {
  let along = 0;
  eachSegment(line, (a, b) => {
    const length = Math.hypot(b[0] - a[0], b[1] - a[1]);
    if (length === 0) return;
    const at = (s: number): Point => [
      a[0] + ((b[0] - a[0]) * s) / length,
      a[1] + ((b[1] - a[1]) * s) / length,
    ];
    for (let s = 0; s < length;) {
      const phase = (along + s) % (DASH_PX + GAP_PX);
      const dash = phase < DASH_PX;
      const end = Math.min(length, s + (dash ? DASH_PX - phase : DASH_PX + GAP_PX - phase) + 1e-9);
      if (dash) draw(at(s), at(end));
      s = end;
    }
    along += length;
  });
}

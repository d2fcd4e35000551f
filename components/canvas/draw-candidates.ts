import { EVENT_CASING, type WellColours } from './stroke-style';
import { toScreen, type Size, type ViewBox } from './view-box';

/** A pair that approaches and separates, as drawn on the image and on the time line. */
export interface CandidateMark {
  event: number;
  frame: number;
  xPx: number;
  yPx: number;
  /** Axis along which the two part, radians from x towards y. */
  partingRad: number;
  /** What people settled, or else what the machine thinks of it. */
  kind: 'confirmed' | 'candidate' | 'rejected';
}

const RADIUS_PX = 9;
const CANDIDATE_DASHES_PX = [3.5, 2.5];

interface DrawOptions {
  frame: number;
  /** A mark shows this many frames before and after its meeting. */
  reachFrames: number;
  view: ViewBox;
  well: Size;
  colours: WellColours;
  chosen: number | null;
}

/**
 * Two arcs back to back, turned to the axis of parting: lines that met and parted. Solid once people
 * confirmed it, dashed until then; a cross for what is none.
 */
export function drawCandidates(
  ctx: CanvasRenderingContext2D,
  marks: readonly CandidateMark[],
  options: DrawOptions,
): void {
  for (const mark of marks) {
    if (Math.abs(mark.frame - options.frame) > options.reachFrames) continue;
    const { x, y } = toScreen(options.view, { x: mark.xPx, y: mark.yPx });
    if (x < -20 || y < -20 || x > options.well.width + 20 || y > options.well.height + 20) continue;
    ctx.save();
    ctx.translate(x, y);
    ctx.rotate(mark.partingRad);
    ctx.lineCap = 'round';
    if (mark.event === options.chosen) ring(ctx, options.colours.chosen);
    if (mark.kind !== 'rejected') {
      arcs(ctx, EVENT_CASING, 4.6, []);
      arcs(ctx, options.colours.event, 1.9, mark.kind === 'confirmed' ? [] : CANDIDATE_DASHES_PX);
    } else {
      cross(ctx, EVENT_CASING, 4.2);
      cross(ctx, options.colours.undecided, 1.5);
    }
    ctx.restore();
  }
}

function arcs(ctx: CanvasRenderingContext2D, colour: string, widthPx: number, dashes: number[]): void {
  const r = RADIUS_PX;
  ctx.strokeStyle = colour;
  ctx.lineWidth = widthPx;
  ctx.setLineDash(dashes);
  ctx.beginPath();
  for (const side of [-1, 1]) {
    ctx.moveTo(side * r * 0.95, -r);
    ctx.quadraticCurveTo(side * r * -0.12, 0, side * r * 0.95, r);
  }
  ctx.stroke();
  ctx.setLineDash([]);
}

function cross(ctx: CanvasRenderingContext2D, colour: string, widthPx: number): void {
  ctx.strokeStyle = colour;
  ctx.lineWidth = widthPx;
  ctx.beginPath();
  ctx.moveTo(-4, -4);
  ctx.lineTo(4, 4);
  ctx.moveTo(4, -4);
  ctx.lineTo(-4, 4);
  ctx.stroke();
}

function ring(ctx: CanvasRenderingContext2D, colour: string): void {
  ctx.strokeStyle = colour;
  ctx.lineWidth = 3;
  ctx.beginPath();
  ctx.arc(0, 0, RADIUS_PX + 6, 0, 2 * Math.PI);
  ctx.stroke();
}

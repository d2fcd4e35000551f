import type { OverlayScene } from '@/components/canvas/frame-well';
import { CASING, CASING_EXTRA_PX } from '@/components/canvas/stroke-style';
import { toScreen, type Point } from '@/components/canvas/view-box';
import { MARK_COLOUR, MARK_DASHES_PX, MARK_PX } from '@/components/ui/strokes';
import type { ShownLine } from './log/local-marks';

const END_PX = 5;

/** Lines that people marked in the frame shown, with a short bar across either end. */
export function drawMarks(scene: OverlayScene, lines: readonly ShownLine[]): void {
  for (const { points } of lines) {
    drawLine(
      scene,
      points.map(([x, y]) => ({ x, y })),
      MARK_COLOUR,
    );
  }
}

/** The line that is being drawn: its points so far, and the way on to where the cross is. */
export function drawBegunLine(scene: OverlayScene, points: readonly Point[], at: Point): void {
  const { ctx, view, colours } = scene;
  drawLine(scene, [...points, at], colours.chosen);
  ctx.save();
  ctx.fillStyle = colours.chosen;
  for (const point of points) {
    const { x, y } = toScreen(view, point);
    ctx.fillRect(x - 2, y - 2, 4, 4);
  }
  ctx.restore();
}

function drawLine({ ctx, view }: OverlayScene, points: readonly Point[], colour: string): void {
  if (points.length < 2) return;
  const places = points.map((point) => toScreen(view, point));
  ctx.save();
  ctx.lineJoin = 'round';
  for (const [style, width] of [
    [CASING, MARK_PX + CASING_EXTRA_PX],
    [colour, MARK_PX],
  ] as const) {
    ctx.strokeStyle = style;
    ctx.lineWidth = width;
    ctx.setLineDash(style === CASING ? [] : MARK_DASHES_PX);
    ctx.beginPath();
    places.forEach(({ x, y }, k) => (k === 0 ? ctx.moveTo(x, y) : ctx.lineTo(x, y)));
    ctx.stroke();
    ctx.setLineDash([]);
    ctx.beginPath();
    endBar(ctx, places[0], places[1]);
    endBar(ctx, places[places.length - 1], places[places.length - 2]);
    ctx.stroke();
  }
  ctx.restore();
}

/** A bar across the end of a line. */
function endBar(ctx: CanvasRenderingContext2D, end: Point, before: Point): void {
  const length = Math.hypot(end.x - before.x, end.y - before.y) || 1;
  const [nx, ny] = [(-(end.y - before.y) / length) * END_PX, ((end.x - before.x) / length) * END_PX];
  ctx.moveTo(end.x - nx, end.y - ny);
  ctx.lineTo(end.x + nx, end.y + ny);
}

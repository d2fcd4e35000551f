import type { Size } from './view-box';

const PADDING_PX = 6;
const HEIGHT_PX = 18;

/** A line of text on the image, kept inside the well, beside the place that it names. */
export function drawTag(
  ctx: CanvasRenderingContext2D,
  text: string,
  at: { x: number; y: number },
  well: Size,
  fontFamily: string,
): void {
  ctx.font = `12px ${fontFamily}`;
  const width = ctx.measureText(text).width + 2 * PADDING_PX;
  const room = at.x + 12 + width <= well.width;
  const left = Math.max(0, room ? at.x + 12 : at.x - 12 - width);
  const top = Math.min(well.height - HEIGHT_PX, Math.max(0, at.y - HEIGHT_PX / 2));
  ctx.fillStyle = 'rgba(6, 9, 11, 0.72)';
  ctx.fillRect(left, top, width, HEIGHT_PX);
  ctx.fillStyle = '#c8d3d5';
  ctx.textBaseline = 'middle';
  ctx.textAlign = 'left';
  ctx.fillText(text, left + PADDING_PX, top + HEIGHT_PX / 2 + 0.5);
}

import { SPOT_EDGE, SPOT_ELONGATED, SPOT_OVERLAP } from '@/tracking/types';
import { toScreen, type Size, type ViewBox } from './view-box';

/** Spots of one frame; entry `i` of every list belongs to spot `i`, positions px of the image. */
export interface FrameSpots {
  x: readonly number[];
  y: readonly number[];
  flags: readonly number[];
}

const CASING = 'rgba(6, 9, 11, 0.78)';
const RING = '#c8d3d5';
const DOUBTFUL = SPOT_EDGE | SPOT_OVERLAP | SPOT_ELONGATED;
const DASHES_PX = [2.5, 2];

/** A ring around every spot; dashed where its image is cut by the edge, merged or drawn out. */
export function drawSpots(
  ctx: CanvasRenderingContext2D,
  spots: FrameSpots,
  view: ViewBox,
  well: Size,
  spotSigmaPx: number,
): void {
  const radius = Math.max(5, 3 * spotSigmaPx * view.scale);
  for (const doubtful of [false, true]) {
    ctx.setLineDash(doubtful ? DASHES_PX : []);
    for (const [colour, widthPx] of [
      [CASING, 3.7],
      [RING, 1.3],
    ] as const) {
      ctx.strokeStyle = colour;
      ctx.lineWidth = widthPx;
      ctx.beginPath();
      for (let i = 0; i < spots.x.length; i += 1) {
        if (((spots.flags[i] & DOUBTFUL) !== 0) !== doubtful) continue;
        const at = toScreen(view, { x: spots.x[i], y: spots.y[i] });
        const outside =
          at.x < -radius || at.y < -radius || at.x > well.width + radius || at.y > well.height + radius;
        if (outside) continue;
        ctx.moveTo(at.x + radius, at.y);
        ctx.arc(at.x, at.y, radius, 0, 2 * Math.PI);
      }
      ctx.stroke();
    }
  }
  ctx.setLineDash([]);
}

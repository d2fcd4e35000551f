import { SPOT_EDGE, SPOT_ELONGATED, SPOT_OVERLAP } from '@/tracking/types';
import { toScreen, type Size, type ViewBox } from './view-box';

/** Spots of one frame; entry `i` of every list belongs to spot `i`, positions px of the image. */
export interface FrameSpots {
  x: readonly number[];
  y: readonly number[];
  flags: readonly number[];
}

const CASING = 'rgba(6, 9, 11, 0.78)';
const THREAD = '#c8d3d5';
/** Length of the stay that points from the thread to the spot's middle. */
const STAY_PX = 4;
const DOUBTFUL = SPOT_EDGE | SPOT_OVERLAP | SPOT_ELONGATED;
const DASHES_PX = [2.5, 2];

/**
 * A short thread under every spot with a stay that points to its middle, so that the spot itself
 * stays free; dashed where its image is cut by the edge, merged or drawn out.
 */
export function drawSpots(
  ctx: CanvasRenderingContext2D,
  spots: FrameSpots,
  view: ViewBox,
  well: Size,
  spotSigmaPx: number,
): void {
  const reach = Math.max(5, 3 * spotSigmaPx * view.scale);
  for (const doubtful of [false, true]) {
    ctx.setLineDash(doubtful ? DASHES_PX : []);
    for (const [colour, widthPx] of [
      [CASING, 3.7],
      [THREAD, 1.3],
    ] as const) {
      ctx.strokeStyle = colour;
      ctx.lineWidth = widthPx;
      ctx.beginPath();
      for (let i = 0; i < spots.x.length; i += 1) {
        if (((spots.flags[i] & DOUBTFUL) !== 0) !== doubtful) continue;
        const at = toScreen(view, { x: spots.x[i], y: spots.y[i] });
        const outside =
          at.x < -reach || at.y < -reach || at.x > well.width + reach || at.y > well.height + reach;
        if (outside) continue;
        ctx.moveTo(at.x - reach, at.y + reach);
        ctx.lineTo(at.x + reach, at.y + reach);
        ctx.moveTo(at.x, at.y + reach);
        ctx.lineTo(at.x, at.y + reach - STAY_PX);
      }
      ctx.stroke();
    }
  }
  ctx.setLineDash([]);
}

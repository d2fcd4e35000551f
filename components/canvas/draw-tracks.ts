import { projectTrails, type ProjectedTrails } from './projected-trails';
import { linePath, placeBeads, taperPath, type ScreenLine } from './stroke-paths';
import {
  BEAD_PER_POINT_SCALE,
  BEAD_RADIUS_PX,
  CASING,
  CASING_EXTRA_PX,
  DASH_STROKE_PX,
  DASHES_PX,
  HALO_OPACITY,
  HALO_PX,
  THREAD_PX,
  type WellColours,
} from './stroke-style';
import { FREE, TRAPPED, UNDECIDED, UNKNOWN, type TrackBlock } from './track-block';
import type { Size, ViewBox } from './view-box';

export interface DrawTracksOptions {
  frame: number;
  trailFrames: number;
  view: ViewBox;
  well: Size;
  colours: WellColours;
  /** Number of the chosen track, null for none. */
  chosen: number | null;
}

/** Paths stroked or filled by one call: long paths cost more than the calls that they save. */
const BATCH = 24;
/** Between thread and bead, so that the casing holds under both. */
const TRAPPED_CASING_PX = 5.4;

type Context2d = CanvasRenderingContext2D;

/**
 * Draws every track of the block that is in the frame: halo of the chosen one first, then undecided,
 * free, trapped. The context must be in CSS px of the well.
 */
export function drawTracks(ctx: Context2d, block: TrackBlock, options: DrawTracksOptions): void {
  const { colours, frame, trailFrames, view, well } = options;
  const trails = projectTrails(block, frame, trailFrames, view, well);
  ctx.lineCap = 'round';
  ctx.lineJoin = 'round';
  drawHalo(ctx, block, trails, options);
  for (const population of [UNKNOWN, UNDECIDED]) {
    drawDashed(ctx, linesOf(trails, population), colours.undecided);
  }
  drawFree(ctx, linesOf(trails, FREE), colours.free);
  drawTrapped(ctx, block, trails, options);
}

function linesOf(trails: ProjectedTrails, wanted: number): ScreenLine[] {
  const lines: ScreenLine[] = [];
  const { x, y, start, population, count } = trails;
  for (let i = 0; i < count; i += 1) {
    if (population[i] === wanted) lines.push({ x, y, from: start[i], to: start[i + 1] });
  }
  return lines;
}

function inBatches(
  ctx: Context2d,
  lines: readonly ScreenLine[],
  add: (line: ScreenLine) => void,
  finish: () => void,
): void {
  for (let i = 0; i < lines.length; i += BATCH) {
    ctx.beginPath();
    for (let k = i; k < Math.min(i + BATCH, lines.length); k += 1) add(lines[k]);
    finish();
  }
}

function strokeLines(ctx: Context2d, lines: readonly ScreenLine[], colour: string, widthPx: number): void {
  ctx.strokeStyle = colour;
  ctx.lineWidth = widthPx;
  inBatches(
    ctx,
    lines,
    (line) => linePath(ctx, line),
    () => ctx.stroke(),
  );
}

function drawDashed(ctx: Context2d, lines: readonly ScreenLine[], colour: string): void {
  strokeLines(ctx, lines, CASING, DASH_STROKE_PX + CASING_EXTRA_PX);
  ctx.lineCap = 'butt';
  ctx.setLineDash(DASHES_PX);
  strokeLines(ctx, lines, colour, DASH_STROKE_PX);
  ctx.setLineDash([]);
  ctx.lineCap = 'round';
}

function drawFree(ctx: Context2d, lines: readonly ScreenLine[], colour: string): void {
  for (const [fill, extraPx] of [
    [CASING, CASING_EXTRA_PX / 2],
    [colour, 0],
  ] as const) {
    ctx.fillStyle = fill;
    inBatches(
      ctx,
      lines,
      (line) => taperPath(ctx, line, extraPx),
      () => ctx.fill(),
    );
  }
}

function drawTrapped(
  ctx: Context2d,
  block: TrackBlock,
  trails: ProjectedTrails,
  options: DrawTracksOptions,
): void {
  const { colours, view } = options;
  const lines = linesOf(trails, TRAPPED);
  strokeLines(ctx, lines, CASING, TRAPPED_CASING_PX);
  strokeLines(ctx, lines, colours.trapped, THREAD_PX);
  ctx.fillStyle = colours.trapped;
  const bead = (x: number, y: number) => {
    ctx.moveTo(x + BEAD_RADIUS_PX, y);
    ctx.arc(x, y, BEAD_RADIUS_PX, 0, 2 * Math.PI);
  };
  if (view.scale < BEAD_PER_POINT_SCALE) {
    inBatches(
      ctx,
      lines,
      (line) => placeBeads(line, bead),
      () => ctx.fill(),
    );
    return;
  }
  for (let i = 0; i < trails.count; i += 1) {
    if (trails.population[i] !== TRAPPED) continue;
    ctx.beginPath();
    // One bead per measured position; bridged frames are thread alone.
    for (let k = trails.first[i]; k <= trails.last[i]; k += 1) {
      if (block.bridged[k]) continue;
      bead(block.x[k] * view.scale + view.offsetX, block.y[k] * view.scale + view.offsetY);
    }
    ctx.fill();
  }
}

function drawHalo(
  ctx: Context2d,
  block: TrackBlock,
  trails: ProjectedTrails,
  options: DrawTracksOptions,
): void {
  if (options.chosen === null) return;
  const { x, y, start, index, count } = trails;
  for (let i = 0; i < count; i += 1) {
    if (block.track[index[i]] !== options.chosen) continue;
    ctx.save();
    ctx.globalAlpha = HALO_OPACITY;
    ctx.strokeStyle = options.colours.chosen;
    ctx.lineWidth = HALO_PX;
    ctx.beginPath();
    linePath(ctx, { x, y, from: start[i], to: start[i + 1] });
    ctx.stroke();
    ctx.restore();
  }
}

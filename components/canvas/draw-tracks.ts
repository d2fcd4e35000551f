import { createScreenLine, linePath, placeBeads, taperPath, type ScreenLine } from './stroke-paths';
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
import { FREE, TRAPPED, trailAt, UNDECIDED, UNKNOWN, type TrackBlock } from './track-block';
import type { Size, ViewBox } from './view-box';

export interface DrawTracksOptions {
  frame: number;
  trailFrames: number;
  view: ViewBox;
  well: Size;
  colours: WellColours;
  /** Number of the chosen track, null for none. */
  chosen: number | null;
  /** Device pixels per CSS px, for sharp beads. */
  pixelRatio: number;
}

/** Tracks beyond the well by this much may still reach into it with their beads and casing. */
const EDGE_PX = 12;
/** Points nearer than this to the one before add work but no shape. */
const MERGE_PX = 1.5;
/** Tracks stroked by one call: long paths cost more than they save. */
const BATCH_TRACKS = 24;

const TRAIL_POINTS_MOST = 4096;
const line = createScreenLine(TRAIL_POINTS_MOST);
const trail = { first: 0, last: 0 };

type Context2d = CanvasRenderingContext2D | OffscreenCanvasRenderingContext2D;

/**
 * Draws every track of the block that is in the frame: halo of the chosen one first, then undecided,
 * free, trapped. The context must be in CSS px of the well.
 */
export function drawTracks(ctx: Context2d, block: TrackBlock, options: DrawTracksOptions): void {
  const { colours } = options;
  ctx.lineCap = 'round';
  ctx.lineJoin = 'round';
  drawHalo(ctx, block, options);
  drawDashed(ctx, block, options, UNKNOWN, colours.undecided);
  drawDashed(ctx, block, options, UNDECIDED, colours.undecided);
  drawFree(ctx, block, options);
  drawTrapped(ctx, block, options);
}

/** Projects the trail of a track into `line`; false when nothing of it shows. */
function project(block: TrackBlock, i: number, options: DrawTracksOptions): boolean {
  if (!trailAt(block, i, options.frame, options.trailFrames, trail)) return false;
  const { scale, offsetX, offsetY } = options.view;
  let left = Infinity;
  let right = -Infinity;
  let top = Infinity;
  let bottom = -Infinity;
  let n = 0;
  for (let k = trail.first; k <= trail.last && n < TRAIL_POINTS_MOST; k += 1) {
    const x = block.x[k] * scale + offsetX;
    const y = block.y[k] * scale + offsetY;
    if (x < left) left = x;
    if (x > right) right = x;
    if (y < top) top = y;
    if (y > bottom) bottom = y;
    const near = n > 0 && Math.abs(x - line.x[n - 1]) < MERGE_PX && Math.abs(y - line.y[n - 1]) < MERGE_PX;
    // The newest point always counts: it must sit on its spot.
    if (near && k < trail.last) continue;
    line.x[n] = x;
    line.y[n] = y;
    n += 1;
  }
  line.length = n;
  return (
    n > 0 &&
    right > -EDGE_PX &&
    left < options.well.width + EDGE_PX &&
    bottom > -EDGE_PX &&
    top < options.well.height + EDGE_PX
  );
}

/** Calls `add` for each track of a population, and `flush` after every batch and at the end. */
function eachBatch(
  block: TrackBlock,
  options: DrawTracksOptions,
  population: number,
  add: (line: ScreenLine, index: number) => void,
  flush: () => void,
): void {
  let held = 0;
  for (let i = 0; i < block.count; i += 1) {
    if (block.population[i] !== population || !project(block, i, options)) continue;
    add(line, i);
    held += 1;
    if (held === BATCH_TRACKS) {
      flush();
      held = 0;
    }
  }
  if (held > 0) flush();
}

function strokeLines(
  ctx: Context2d,
  block: TrackBlock,
  options: DrawTracksOptions,
  population: number,
): void {
  ctx.beginPath();
  eachBatch(
    block,
    options,
    population,
    (shape) => linePath(ctx, shape),
    () => {
      ctx.stroke();
      ctx.beginPath();
    },
  );
}

function drawDashed(
  ctx: Context2d,
  block: TrackBlock,
  options: DrawTracksOptions,
  population: number,
  colour: string,
): void {
  ctx.strokeStyle = CASING;
  ctx.lineWidth = DASH_STROKE_PX + CASING_EXTRA_PX;
  strokeLines(ctx, block, options, population);
  ctx.strokeStyle = colour;
  ctx.lineWidth = DASH_STROKE_PX;
  ctx.lineCap = 'butt';
  ctx.setLineDash(DASHES_PX);
  strokeLines(ctx, block, options, population);
  ctx.setLineDash([]);
  ctx.lineCap = 'round';
}

function drawFree(ctx: Context2d, block: TrackBlock, options: DrawTracksOptions): void {
  const { colours } = options;
  for (const [fill, extraPx] of [
    [CASING, CASING_EXTRA_PX / 2],
    [colours.free, 0],
  ] as const) {
    ctx.fillStyle = fill;
    ctx.beginPath();
    eachBatch(
      block,
      options,
      FREE,
      (shape) => taperPath(ctx, shape, extraPx),
      () => {
        ctx.fill();
        ctx.beginPath();
      },
    );
  }
}

function drawTrapped(ctx: Context2d, block: TrackBlock, options: DrawTracksOptions): void {
  const { colours } = options;
  ctx.strokeStyle = CASING;
  ctx.lineWidth = 2 * BEAD_RADIUS_PX + CASING_EXTRA_PX / 2;
  strokeLines(ctx, block, options, TRAPPED);
  ctx.strokeStyle = colours.trapped;
  ctx.lineWidth = THREAD_PX;
  strokeLines(ctx, block, options, TRAPPED);
  const bead = beadSprite(colours.trapped, options.pixelRatio);
  const half = bead.sizePx / 2;
  const place = (x: number, y: number) =>
    ctx.drawImage(bead.canvas, x - half, y - half, bead.sizePx, bead.sizePx);
  const perPoint = options.view.scale >= BEAD_PER_POINT_SCALE;
  for (let i = 0; i < block.count; i += 1) {
    if (block.population[i] !== TRAPPED || !project(block, i, options)) continue;
    if (!perPoint) placeBeads(line, 1, place);
    else placeMeasured(block, options.view, place);
  }
}

/** One bead per measured position of the trail; bridged frames are thread alone. */
function placeMeasured(block: TrackBlock, view: ViewBox, place: (x: number, y: number) => void): void {
  for (let k = trail.first; k <= trail.last; k += 1) {
    if (!block.bridged[k])
      place(block.x[k] * view.scale + view.offsetX, block.y[k] * view.scale + view.offsetY);
  }
}

function drawHalo(ctx: Context2d, block: TrackBlock, options: DrawTracksOptions): void {
  if (options.chosen === null) return;
  const i = block.track.indexOf(options.chosen);
  if (i < 0 || !project(block, i, options)) return;
  ctx.save();
  ctx.globalAlpha = HALO_OPACITY;
  ctx.strokeStyle = options.colours.chosen;
  ctx.lineWidth = HALO_PX;
  ctx.beginPath();
  linePath(ctx, line);
  ctx.stroke();
  ctx.restore();
}

interface Sprite {
  canvas: OffscreenCanvas;
  sizePx: number;
}
const sprites = new Map<string, Sprite>();

/** A bead as a small picture: copying it is many times cheaper than filling a circle. */
function beadSprite(colour: string, pixelRatio: number): Sprite {
  const key = `${colour} ${pixelRatio}`;
  const found = sprites.get(key);
  if (found) return found;
  const sizePx = Math.ceil(2 * BEAD_RADIUS_PX + 2);
  const canvas = new OffscreenCanvas(Math.ceil(sizePx * pixelRatio), Math.ceil(sizePx * pixelRatio));
  const ctx = canvas.getContext('2d');
  if (ctx) {
    ctx.scale(pixelRatio, pixelRatio);
    ctx.fillStyle = colour;
    ctx.beginPath();
    ctx.arc(sizePx / 2, sizePx / 2, BEAD_RADIUS_PX, 0, 2 * Math.PI);
    ctx.fill();
  }
  const sprite = { canvas, sizePx };
  sprites.set(key, sprite);
  return sprite;
}

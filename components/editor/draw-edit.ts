import { drawTag } from '@/components/canvas/draw-tag';
import type { NearScene, OverlayScene } from '@/components/canvas/frame-well';
import { linePath } from '@/components/canvas/stroke-paths';
import { CASING, CASING_EXTRA_PX, DASHES_PX } from '@/components/canvas/stroke-style';
import type { TrackBlock } from '@/components/canvas/track-block';
import { toScreen, type Point, type Size } from '@/components/canvas/view-box';
import type { JoinCandidate } from './join-candidates';
import { isProvisional, trackName } from './log/gesture';
import type { ShownTrack } from './log/local-tracks';

/** Frames before and after in which a track is shown besides its trail. */
export const GHOST_FRAMES = 15;
const GHOST_STEP_PX = 6;

/** Past places of a track as filled beads, future ones as rings, both smaller with distance in time. */
export function drawGhosts(
  { ctx, view, colours }: OverlayScene,
  { points }: ShownTrack,
  frame: number,
): void {
  ctx.save();
  ctx.lineWidth = 1.2;
  let [beforeX, beforeY] = [Number.NaN, Number.NaN];
  for (let ahead = -GHOST_FRAMES; ahead <= GHOST_FRAMES; ahead += 1) {
    const i = frame + ahead - points.frame[0];
    if (ahead === 0 || i < 0 || i >= points.frame.length || Number.isNaN(points.xPx[i])) continue;
    const { x, y } = toScreen(view, { x: points.xPx[i], y: points.yPx[i] });
    // Places closer than an eye can tell apart would only make a smear.
    if (Math.abs(x - beforeX) < GHOST_STEP_PX && Math.abs(y - beforeY) < GHOST_STEP_PX) continue;
    [beforeX, beforeY] = [x, y];
    const radius = 3.6 - (2 * Math.abs(ahead)) / GHOST_FRAMES;
    ctx.beginPath();
    ctx.arc(x, y, radius, 0, 2 * Math.PI);
    ctx.strokeStyle = CASING;
    ctx.lineWidth = 1.2 + CASING_EXTRA_PX;
    ctx.stroke();
    ctx.lineWidth = 1.2;
    if (ahead < 0) {
      ctx.fillStyle = colours.undecided;
      ctx.fill();
    } else {
      ctx.strokeStyle = colours.undecided;
      ctx.stroke();
    }
  }
  ctx.restore();
}

/** Ring around the point of a track in the frame shown, for the second of a pair. */
export function drawRing({ ctx, view, colours }: OverlayScene, place: Point): void {
  const { x, y } = toScreen(view, place);
  ctx.save();
  for (const [style, width] of [
    [CASING, 2 + CASING_EXTRA_PX],
    [colours.chosen, 2],
  ] as const) {
    ctx.strokeStyle = style;
    ctx.lineWidth = width;
    ctx.beginPath();
    ctx.arc(x, y, 11, 0, 2 * Math.PI);
    ctx.stroke();
  }
  ctx.restore();
}

const screen = { x: new Float32Array(0), y: new Float32Array(0) };

/** Tracks that could be joined, which are in other frames than this: dashed, with their numbers. */
export function drawCandidateTracks(
  scene: OverlayScene,
  block: TrackBlock,
  candidates: readonly JoinCandidate[],
  second: number | null,
): void {
  const { ctx, view, colours, well } = scene;
  const font = getComputedStyle(document.body).fontFamily;
  for (const { index, track } of candidates) {
    const [from, to] = [block.start[index], block.start[index + 1]];
    if (screen.x.length < to - from) {
      screen.x = new Float32Array(to - from);
      screen.y = new Float32Array(to - from);
    }
    for (let k = from; k < to; k += 1) {
      screen.x[k - from] = block.x[k] * view.scale + view.offsetX;
      screen.y[k - from] = block.y[k] * view.scale + view.offsetY;
    }
    const line = { ...screen, from: 0, to: to - from };
    const isSecond = track === second;
    ctx.save();
    for (const [style, width] of [
      [CASING, 1.4 + CASING_EXTRA_PX],
      [isSecond ? colours.chosen : colours.undecided, isSecond ? 2.4 : 1.4],
    ] as const) {
      ctx.strokeStyle = style;
      ctx.lineWidth = width;
      ctx.setLineDash(isSecond ? [] : DASHES_PX);
      ctx.beginPath();
      linePath(ctx, line);
      ctx.stroke();
    }
    ctx.restore();
    drawTag(ctx, tagOf(track), { x: screen.x[0], y: screen.y[0] }, well, font);
  }
}

const tagOf = (track: number) => (isProvisional(track) ? trackName(track) : String(track));

/** A place that is being looked for: a cross with a gap, and the standard error where one is known. */
export function drawPlace(
  { ctx, view, colours }: OverlayScene,
  place: Point,
  errorPx: { sx: number; sy: number } | null,
): void {
  const { x, y } = toScreen(view, place);
  ctx.save();
  for (const [style, width] of [
    [CASING, 1.5 + CASING_EXTRA_PX],
    [colours.chosen, 1.5],
  ] as const) {
    ctx.strokeStyle = style;
    ctx.lineWidth = width;
    ctx.beginPath();
    for (const [dx, dy] of [
      [1, 0],
      [-1, 0],
      [0, 1],
      [0, -1],
    ]) {
      ctx.moveTo(x + dx * 5, y + dy * 5);
      ctx.lineTo(x + dx * 16, y + dy * 16);
    }
    ctx.stroke();
    if (errorPx) {
      ctx.beginPath();
      ctx.ellipse(x, y, Math.max(1, errorPx.sx * view.scale), Math.max(1, errorPx.sy * view.scale), 0, 0, 7);
      ctx.stroke();
    }
  }
  ctx.restore();
}

const LENS_PX = 190;
const LENS_GAIN = 4;
/** A camera pixel in the magnifier is at least this large, px, and no larger than that unless the picture's are. */
const LENS_PIXEL_PX = 10;
const LENS_PIXEL_MOST_PX = 24;

/** The surroundings of a place several times larger, in the corner that is farther from it. */
export function drawMagnifier(
  { ctx, picture, view, well, colours, state }: NearScene,
  image: Size,
  place: Point,
  block: TrackBlock | null,
): void {
  if (!picture) return;
  const at = toScreen(view, place);
  const left = at.x > well.width / 2 ? 8 : well.width - LENS_PX - 8;
  const top = well.height - LENS_PX - 8;
  const wished = Math.min(view.scale * LENS_GAIN, LENS_PIXEL_MOST_PX);
  const scale = Math.max(wished, LENS_PIXEL_PX, 1.5 * view.scale);
  ctx.save();
  ctx.fillStyle = '#06090b';
  ctx.fillRect(left, top, LENS_PX, LENS_PX);
  ctx.beginPath();
  ctx.rect(left, top, LENS_PX, LENS_PX);
  ctx.clip();
  const x0 = left + LENS_PX / 2 - place.x * scale;
  const y0 = top + LENS_PX / 2 - place.y * scale;
  ctx.imageSmoothingEnabled = false;
  ctx.drawImage(picture, x0 - scale / 2, y0 - scale / 2, image.width * scale, image.height * scale);
  if (block) drawLensPoints(ctx, block, state.shown, { x0, y0, scale, left, top }, colours.undecided);
  ctx.strokeStyle = colours.chosen;
  ctx.lineWidth = 1;
  ctx.beginPath();
  ctx.moveTo(left + LENS_PX / 2 - 9, top + LENS_PX / 2);
  ctx.lineTo(left + LENS_PX / 2 + 9, top + LENS_PX / 2);
  ctx.moveTo(left + LENS_PX / 2, top + LENS_PX / 2 - 9);
  ctx.lineTo(left + LENS_PX / 2, top + LENS_PX / 2 + 9);
  ctx.stroke();
  ctx.restore();
  ctx.strokeStyle = '#c8d3d5';
  ctx.lineWidth = 1;
  ctx.strokeRect(left + 0.5, top + 0.5, LENS_PX - 1, LENS_PX - 1);
}

/** Rings where tracks have their points in this frame. */
function drawLensPoints(
  ctx: CanvasRenderingContext2D,
  block: TrackBlock,
  frame: number,
  { x0, y0, scale, left, top }: { x0: number; y0: number; scale: number; left: number; top: number },
  colour: string,
): void {
  ctx.strokeStyle = colour;
  ctx.lineWidth = 1.3;
  for (let i = 0; i < block.count; i += 1) {
    const k = block.start[i] + frame - block.frame[block.start[i]];
    if (k < block.start[i] || k >= block.start[i + 1] || block.frame[k] !== frame) continue;
    const [x, y] = [x0 + block.x[k] * scale, y0 + block.y[k] * scale];
    if (x < left - 9 || y < top - 9 || x > left + LENS_PX + 9 || y > top + LENS_PX + 9) continue;
    ctx.beginPath();
    ctx.arc(x, y, 7, 0, 2 * Math.PI);
    ctx.stroke();
  }
}

import { Jimp, loadFont } from 'jimp';
import { SANS_16_WHITE } from 'jimp/fonts';
import { type Film, type FilmPath, stripFrames } from '@/lib/review/film';
import { cutFrame } from './cut-frame';
import { greyImage } from './grey-image';
import type { StackReader } from './open-stack';
import { scaleBar } from './scale-bar';
import { inkTrack, type InkPath } from './track-ink';

/** A picture of a frame is at least so wide, px; each camera pixel becomes a square of whole pixels. */
const TILE_LEAST_PX = 116;
const GAP_PX = 4;
const CAPTION_PX = 24;
const GROUND = 0x10141aff;
const BAR = 0xffffffff;
const BAR_PX = 3;
/** Between the last frame's picture and the caption of the scale. */
const FOOT_PX = 22;

export interface StripPath extends FilmPath {
  population: number | null;
  bridged: ArrayLike<boolean>;
}

export interface CandidateStrip {
  film: Film;
  paths: readonly StripPath[];
  contrast: { low: number; high: number };
  pixelSizeM: number;
  frameIntervalS: number;
}

/** Time of a frame as people count it from the meeting: `-8 ms`, `frame 412`, `+8 ms`. */
export function stripCaption(frame: number, middleFrame: number, frameIntervalS: number): string {
  if (frame === middleFrame) return `frame ${frame}`;
  const ms = (frame - middleFrame) * frameIntervalS * 1e3;
  const digits = Math.abs(ms) >= 100 ? 0 : Math.abs(ms) >= 10 ? 1 : 2;
  return `${ms > 0 ? '+' : '-'}${Number(Math.abs(ms).toFixed(digits))} ms`;
}

/**
 * The frames around a meeting side by side, cut to the same square, each with both tracks as far as they have come
 * by then, times from closest approach and a scale bar.
 * @returns a PNG file
 */
export async function makeCandidateStrip(reader: StackReader, strip: CandidateStrip): Promise<Buffer> {
  const { film, paths, contrast, pixelSizeM, frameIntervalS } = strip;
  const frames = stripFrames(film);
  const zoom = Math.max(1, Math.ceil(TILE_LEAST_PX / film.sizePx));
  const tilePx = film.sizePx * zoom;
  const step = tilePx + GAP_PX;
  const picture = new Jimp({
    width: frames.length * step + GAP_PX,
    height: tilePx + CAPTION_PX + FOOT_PX + 2 * GAP_PX,
    color: GROUND,
  });
  const font = await loadFont(SANS_16_WHITE);
  for (const [i, frame] of frames.entries()) {
    const tile = await tileOf(reader, frame, film, contrast, tilePx);
    const drawn = paths.map((path) => inkPath(path, frame, film, zoom));
    for (const layer of ['casing', 'stroke'] as const) {
      for (const path of drawn) inkTrack(tile.bitmap, path, layer);
    }
    picture.composite(tile, GAP_PX + i * step, GAP_PX);
    const text = stripCaption(frame, film.middleFrame, frameIntervalS);
    picture.print({ font, x: GAP_PX + i * step + 2, y: tilePx + GAP_PX + 2, text });
  }
  const bar = scaleBar(pixelSizeM / zoom, tilePx * 0.8);
  const y = tilePx + CAPTION_PX + GAP_PX;
  const width = Math.max(1, Math.round(bar.lengthPx));
  picture.composite(new Jimp({ width, height: BAR_PX, color: BAR }), GAP_PX + 2, y + 9);
  picture.print({ font, x: GAP_PX + width + 10, y, text: bar.label });
  return picture.getBuffer('image/png');
}

/** The square of a frame, enlarged so that camera pixels stay squares. */
async function tileOf(
  reader: StackReader,
  frame: number,
  film: Film,
  { low, high }: CandidateStrip['contrast'],
  tilePx: number,
) {
  const image = greyImage(cutFrame(await reader.readFrame(frame), film), low, high);
  const { data } = await image
    .resize({ width: tilePx, height: tilePx, kernel: 'nearest' })
    .toColourspace('srgb')
    .ensureAlpha()
    .raw()
    .toBuffer({ resolveWithObject: true });
  return new Jimp({ width: tilePx, height: tilePx, data });
}

/** Points up to a frame, on the picture: the centre of camera pixel 0 is half its square in. */
function inkPath(path: StripPath, frame: number, { leftPx, topPx }: Film, zoom: number): InkPath {
  const points: { x: number; y: number; bridged: boolean }[] = [];
  for (let i = 0; i < path.frame.length && path.frame[i] <= frame; i++) {
    points.push({
      x: (path.x[i] - leftPx + 0.5) * zoom - 0.5,
      y: (path.y[i] - topPx + 0.5) * zoom - 0.5,
      bridged: path.bridged[i],
    });
  }
  return { population: path.population, points };
}

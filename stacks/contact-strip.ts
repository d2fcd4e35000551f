import { Jimp, loadFont } from 'jimp';
import { SANS_16_WHITE } from 'jimp/fonts';
import { rename, rm, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { spreadFrames } from '@/tracking/image-quality/spread-frames';
import { greyImage } from './grey-image';
import { type StackReader } from './open-stack';
import { scaleBar } from './scale-bar';

/** Name of the strip in a stack's folder. */
export const STRIP_FILE = 'strip.png';

const FRAMES = 8;
const TILE_PX = 200;
const GAP_PX = 4;
const CAPTION_PX = 26;
const GROUND = 0x10141aff;
const BAR = 0xffffffff;
const BAR_PX = 3;

export interface StripOptions {
  low: number;
  high: number;
  /** Metres per pixel; without it no scale bar is drawn. */
  pixelSizeM?: number | null;
  /** Seconds per frame; without it captions have frame numbers alone. */
  frameIntervalS?: number | null;
}

interface TileSize {
  width: number;
  height: number;
}

/** `frame 120, 1.20 s`, frames from 0 as in all tables. */
export function caption(frame: number, frameIntervalS: number | null | undefined): string {
  if (!frameIntervalS) return `frame ${frame}`;
  const seconds = frame * frameIntervalS;
  return `frame ${frame}, ${seconds.toFixed(seconds < 10 ? 3 : 1)} s`;
}

async function tile(reader: StackReader, frame: number, { low, high }: StripOptions, size: TileSize) {
  const image = greyImage(await reader.readFrame(frame), low, high);
  const { data } = await image
    .resize({ ...size, fit: 'fill' })
    .toColourspace('srgb')
    .ensureAlpha()
    .raw()
    .toBuffer({ resolveWithObject: true });
  return new Jimp({ ...size, data });
}

function drawBar(strip: InstanceType<typeof Jimp>, x: number, y: number, lengthPx: number): void {
  const bar = new Jimp({ width: Math.max(1, Math.round(lengthPx)), height: BAR_PX, color: BAR });
  strip.composite(bar, x, y);
}

/** Frames spread over the stack side by side, with their numbers, times and a scale bar, as a PNG file. */
export async function makeContactStrip(reader: StackReader, options: StripOptions): Promise<Buffer> {
  const frames = spreadFrames(reader.frames, FRAMES);
  const scale = TILE_PX / Math.max(reader.width, reader.height);
  const [width, height] = [reader.width, reader.height].map((px) => Math.max(1, Math.round(px * scale)));
  const size: TileSize = { width: width!, height: height! };
  const step = Math.max(size.width, TILE_PX) + GAP_PX;
  const strip = new Jimp({
    width: frames.length * step + GAP_PX,
    height: size.height + CAPTION_PX + 2 * GAP_PX,
    color: GROUND,
  });
  const font = await loadFont(SANS_16_WHITE);
  for (const [i, frame] of frames.entries()) {
    const x = GAP_PX + i * step;
    strip.composite(await tile(reader, frame, options, size), x, GAP_PX);
    strip.print({
      font,
      x: x + 2,
      y: size.height + GAP_PX + 3,
      text: caption(frame, options.frameIntervalS),
    });
  }
  if (options.pixelSizeM) {
    const bar = scaleBar(options.pixelSizeM / scale, size.width / 2);
    drawBar(strip, 2 * GAP_PX, size.height - 2 * GAP_PX, bar.lengthPx);
    strip.print({ font, x: 2 * GAP_PX, y: size.height - 2 * GAP_PX - 22, text: bar.label });
  }
  return strip.getBuffer('image/png');
}

/** Makes the strip of the stack in `dir` and puts it there as `strip.png`, whole or not at all. */
export async function writeContactStrip(
  dir: string,
  reader: StackReader,
  options: StripOptions,
): Promise<void> {
  const path = join(dir, STRIP_FILE);
  const part = `${path}.${process.pid}.part`;
  try {
    await writeFile(part, await makeContactStrip(reader, options));
    await rename(part, path);
  } catch (cause) {
    await rm(part, { force: true });
    throw cause;
  }
}

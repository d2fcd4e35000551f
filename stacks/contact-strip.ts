import { Jimp, loadFont, ResizeStrategy } from 'jimp';
import { SANS_16_WHITE } from 'jimp/fonts';
import { rename, rm, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { spreadFrames } from '@/tracking/image-quality/spread-frames';
import { type StackReader } from './open-stack';
import { scaleBar } from './scale-bar';
import { stretchToBytes } from './stretch';

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

/** `frame 120, 1.20 s`, frames from 0 as in all tables. */
export function caption(frame: number, frameIntervalS: number | null | undefined): string {
  if (!frameIntervalS) return `frame ${frame}`;
  const seconds = frame * frameIntervalS;
  return `frame ${frame}, ${seconds.toFixed(seconds < 10 ? 3 : 1)} s`;
}

async function tile(reader: StackReader, frame: number, { low, high }: StripOptions) {
  const { width, height, counts } = await reader.readFrame(frame);
  const grey = stretchToBytes(counts, low, high);
  const rgba = Buffer.alloc(grey.length * 4, 255);
  grey.forEach((value, i) => rgba.fill(value, i * 4, i * 4 + 3));
  const scale = TILE_PX / Math.max(width, height);
  const size = { w: Math.max(1, Math.round(width * scale)), h: Math.max(1, Math.round(height * scale)) };
  return new Jimp({ width, height, data: rgba }).resize({ ...size, mode: ResizeStrategy.BILINEAR });
}

function drawBar(strip: InstanceType<typeof Jimp>, x: number, y: number, lengthPx: number): void {
  const bar = new Jimp({ width: Math.max(1, Math.round(lengthPx)), height: BAR_PX, color: BAR });
  strip.composite(bar, x, y);
}

/** Frames spread over the stack side by side, with their numbers, times and a scale bar, as a PNG file. */
export async function makeContactStrip(reader: StackReader, options: StripOptions): Promise<Buffer> {
  const frames = spreadFrames(reader.frames, FRAMES);
  const scale = TILE_PX / Math.max(reader.width, reader.height);
  const [tileWidth, tileHeight] = [reader.width, reader.height].map((px) =>
    Math.max(1, Math.round(px * scale)),
  );
  const step = Math.max(tileWidth!, TILE_PX) + GAP_PX;
  const strip = new Jimp({
    width: frames.length * step + GAP_PX,
    height: tileHeight! + CAPTION_PX + 2 * GAP_PX,
    color: GROUND,
  });
  const font = await loadFont(SANS_16_WHITE);
  for (const [i, frame] of frames.entries()) {
    const x = GAP_PX + i * step;
    strip.composite(await tile(reader, frame, options), x, GAP_PX);
    strip.print({
      font,
      x: x + 2,
      y: tileHeight! + GAP_PX + 3,
      text: caption(frame, options.frameIntervalS),
    });
  }
  if (options.pixelSizeM) {
    const bar = scaleBar(options.pixelSizeM / scale, tileWidth! / 2);
    drawBar(strip, 2 * GAP_PX, tileHeight! - 2 * GAP_PX, bar.lengthPx);
    strip.print({ font, x: 2 * GAP_PX, y: tileHeight! - 2 * GAP_PX - 22, text: bar.label });
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

import sharp, { type Sharp } from 'sharp';
import { type Frame } from '@/tracking/types';
import { STACK_LIMITS } from './limits';
import { stretchToBytes, stretchToBytesLog, type BrightnessScale } from './stretch';

// Frames are asked for once each, by several processes on few cores.
sharp.cache(false);
sharp.concurrency(1);

/** A frame as a grey 8-bit picture, `low` black and `high` white, to resize and encode. */
export function greyImage(
  { width, height, counts }: Frame,
  low: number,
  high: number,
  scale: BrightnessScale = 'linear',
): Sharp {
  const stretch = scale === 'log' ? stretchToBytesLog : stretchToBytes;
  return sharp(stretch(counts, low, high), {
    raw: { width, height, channels: 1 },
    limitInputPixels: STACK_LIMITS.pixelsPerPage,
  }).toColourspace('b-w');
}

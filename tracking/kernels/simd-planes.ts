import { lightStride } from '../detection/light-level';
import type { Arena } from './arena';

/** Kernels work on 16 pixels at a time and may write so many bytes behind a plane's last pixel. */
const SLACK_BYTES = 64;
/** Numbers in `FrameFacts`. */
const FACTS = 5;
/** Pixels of a row that share a mark of being painted; as in `assembly/joint-fit-paint.ts`. */
const PAINTED_RUN = 64;
/** Rows that are correlated before the next ones are fetched: few enough to stay in the cache. */
const BAND_ROWS = 32;

/** Where everything lies in the memory of one instance, byte addresses. */
export interface SimdPlanes {
  bad: number;
  background: number;
  counts: number;
  /** f32 light of spots that were fitted. */
  spotLight: number;
  /** u8 per run of pixels of a row: where that isn't all zeros. */
  painted: number;
  response: number;
  /** f32, see `FrameFacts` in `assembly/counts.ts`. */
  facts: number;
  /** i32, room for a peak in every block of 2 x 2 pixels, which is as many as there can be. */
  peaks: number;
  peaksMost: number;
  /** f32, packed samples of the light; see `lightStride`. */
  lightElectrons: number;
  lightBackground: number;
  lightMost: number;
  /** f64, three sums over them. */
  lightSums: number;
  /** f32, two rows of blocks of the background, drawn out to the image's width. */
  blockRows: number;
  /** f32 at distance 0 .. reach. */
  weights: number;
  /** f32 factor per column of the response. */
  correctionX: number;
  /** f32 factor per row. */
  correctionY: number;
  /** f32, one row of noise with `reach` zeros before it and at least as many after it. */
  noise: number;
  /** f32, rows that are correlated along x: `bandRows` of them and `reach` before and after. */
  band: number;
  bandRows: number;
  /** Pixels of a row that the filter works on, a multiple of 16. */
  paddedWidth: number;
  scratch: number;
}

/** Reserves the planes of images of a size; the arena must grow before they are used. */
export function reservePlanes(
  arena: Arena,
  width: number,
  height: number,
  reach: number,
  scratchBytes: number,
): SimdPlanes {
  const pixels = width * height;
  const floats = (length: number) => arena.reserve(4 * length + SLACK_BYTES);
  const bytes = (length: number) => arena.reserve(length + SLACK_BYTES);
  const paddedWidth = Math.ceil(width / 16) * 16;
  const peaksMost = Math.ceil(width / 2) * Math.ceil(height / 2);
  const lightMost = Math.ceil(pixels / lightStride(pixels));
  const bandRows = Math.min(BAND_ROWS, height);
  return {
    bad: bytes(pixels),
    background: floats(pixels),
    counts: floats(pixels),
    spotLight: floats(pixels),
    painted: bytes(Math.ceil(width / PAINTED_RUN) * height),
    response: floats(pixels),
    facts: floats(FACTS),
    peaks: floats(peaksMost),
    peaksMost,
    lightElectrons: floats(lightMost),
    lightBackground: floats(lightMost),
    lightMost,
    lightSums: floats(6),
    blockRows: floats(2 * paddedWidth),
    weights: floats(reach + 1),
    correctionX: floats(paddedWidth),
    correctionY: floats(height),
    noise: floats(paddedWidth + 2 * reach),
    band: floats(paddedWidth * (bandRows + 2 * reach)),
    bandRows,
    paddedWidth,
    scratch: bytes(scratchBytes),
  };
}

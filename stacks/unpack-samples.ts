import { type FrameLayout, rowBytes } from './frame-layout';
import { wholeByteSamples } from './whole-byte-samples';

type Layout = Pick<FrameLayout, 'bits' | 'sampleKind' | 'littleEndian' | 'samplesPerPixel'>;

/** Samples of 9 to 15 bits: most significant bit first whatever the byte order, as TIFF 6.0 packs them. */
function packedRow(
  bytes: Uint8Array,
  from: number,
  bits: number,
  out: Float32Array,
  to: number,
  count: number,
) {
  const mask = (1 << bits) - 1;
  let held = 0;
  let value = 0;
  let at = from;
  for (let i = 0; i < count; i++) {
    while (held < bits) {
      value = ((value << 8) | bytes[at++]!) & 0xffffff;
      held += 8;
    }
    held -= bits;
    out[to + i] = (value >>> held) & mask;
  }
}

/**
 * Samples of `rows` rows of `columns` pixels, row by row, channels interleaved, as numbers.
 * @param bytes at least `rows * rowBytes(columns, layout)` of them
 */
export function unpackSamples(
  bytes: Uint8Array,
  layout: Layout,
  rows: number,
  columns: number,
  out: Float32Array,
): void {
  const perRow = columns * layout.samplesPerPixel;
  if (layout.bits % 8 === 0) {
    wholeByteSamples(layout, bytes, out.subarray(0, rows * perRow));
    return;
  }
  const size = rowBytes(columns, layout);
  for (let row = 0; row < rows; row++) packedRow(bytes, row * size, layout.bits, out, row * perRow, perRow);
}

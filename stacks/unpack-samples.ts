import { type FrameLayout, rowBytes } from './frame-layout';

type Layout = Pick<FrameLayout, 'bits' | 'sampleKind' | 'littleEndian' | 'samplesPerPixel'>;

function wholeBytes(layout: Layout, bytes: Uint8Array, out: Float32Array, count: number): void {
  const { bits, sampleKind, littleEndian } = layout;
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  if (bits === 8 && sampleKind === 'uint') for (let i = 0; i < count; i++) out[i] = bytes[i]!;
  else if (bits === 8) for (let i = 0; i < count; i++) out[i] = view.getInt8(i);
  else if (bits === 32) for (let i = 0; i < count; i++) out[i] = view.getFloat32(i * 4, littleEndian);
  else if (sampleKind === 'int') for (let i = 0; i < count; i++) out[i] = view.getInt16(i * 2, littleEndian);
  else for (let i = 0; i < count; i++) out[i] = view.getUint16(i * 2, littleEndian);
}

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
    wholeBytes(layout, bytes, out, rows * perRow);
    return;
  }
  const size = rowBytes(columns, layout);
  for (let row = 0; row < rows; row++) packedRow(bytes, row * size, layout.bits, out, row * perRow, perRow);
}

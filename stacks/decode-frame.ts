import { chunkBytes, chunkGrid, chunkRows } from './chunk-grid';
import { COMPRESSION, type FrameLayout } from './frame-layout';
import { pickChannel } from './pick-channel';
import { decodePng } from './png/decode-png';
import { decompress } from './tiff/decompress';
import { undoDifferences, undoFloatDifferences } from './tiff/predictor';
import { unpackSamples } from './unpack-samples';

/** A frame whose data gives fewer bytes than its size needs. */
export class ShortFrameError extends RangeError {
  constructor(
    readonly neededBytes: number,
    readonly heldBytes: number,
  ) {
    super(`The frame needs ${neededBytes} bytes but holds ${heldBytes}.`);
    this.name = 'ShortFrameError';
  }
}

function joined(parts: Uint8Array[]): Uint8Array {
  return parts.length === 1 ? parts[0]! : Buffer.concat(parts);
}

/** Samples of one chunk, channels interleaved. */
function decodeChunk(bytes: Uint8Array, layout: FrameLayout, rows: number): Float32Array {
  if (layout.predictor !== 1) {
    const samples = { ...layout, bytes, rows, columns: layout.chunkWidth };
    if (layout.predictor === 3) undoFloatDifferences(samples);
    else undoDifferences(samples);
  }
  const out = new Float32Array(rows * layout.chunkWidth * layout.samplesPerPixel);
  unpackSamples(bytes, layout, rows, layout.chunkWidth, out);
  return out;
}

/** Decompresses every chunk and knows how many bytes are missing in all. */
function expandChunks(parts: Uint8Array[], layout: FrameLayout, width: number, height: number): Uint8Array[] {
  const { across } = chunkGrid(layout, width, height);
  const perPlane = parts.length / layout.planes;
  const full = chunkBytes({ ...layout, tiled: true }, height, 0);
  let [needed, held] = [0, 0];
  const expanded = parts.map((part, i) => {
    const expected = chunkBytes(layout, height, Math.floor((i % perPlane) / across));
    const bytes = decompress(part, layout.compression, expected, full);
    needed += expected;
    held += bytes.byteLength;
    return bytes;
  });
  if (held < needed) throw new ShortFrameError(needed, held);
  return expanded;
}

function placeChunks(
  chunks: Uint8Array[],
  layout: FrameLayout,
  width: number,
  height: number,
  out: Float32Array,
) {
  const { across, down } = chunkGrid(layout, width, height);
  for (let j = 0; j < down; j++) {
    const rows = chunkRows(layout, height, j);
    for (let i = 0; i < across; i++) {
      const samples = decodeChunk(chunks[j * across + i]!, layout, rows);
      const counts = layout.samplesPerPixel === 1 ? samples : new Float32Array(rows * layout.chunkWidth);
      pickChannel(samples, layout, counts);
      const [x, y] = [i * layout.chunkWidth, j * layout.chunkHeight];
      const columns = Math.min(layout.chunkWidth, width - x);
      for (let row = 0; row < Math.min(rows, height - y); row++) {
        const from = row * layout.chunkWidth;
        out.set(counts.subarray(from, from + columns), (y + row) * width + x);
      }
    }
  }
}

/** Mean over separately stored colour planes. */
function placePlanes(
  chunks: Uint8Array[],
  layout: FrameLayout,
  width: number,
  height: number,
  out: Float32Array,
) {
  const perPlane = chunks.length / layout.planes;
  const plane = new Float32Array(out.length);
  out.fill(0);
  for (let p = 0; p < layout.planes; p++) {
    placeChunks(chunks.slice(p * perPlane, (p + 1) * perPlane), layout, width, height, plane);
    for (let i = 0; i < out.length; i++) out[i] = out[i]! + plane[i]! / layout.planes;
  }
}

/**
 * One frame's counts from its stored bytes.
 * @param parts the frame's segments in order: strips or tiles, or one whole PNG file. Uncompressed
 *   strips may come merged.
 * @param out width * height entries, row by row
 * @throws ShortFrameError when data is missing, and the decoder's error when it is damaged.
 */
export function decodeFrame(
  parts: Uint8Array[],
  layout: FrameLayout,
  width: number,
  height: number,
  out: Float32Array,
): void {
  if (layout.container === 'png') {
    pickChannel(decodePng(joined(parts), width, height), layout, out);
    return;
  }
  const merged = layout.compression === COMPRESSION.none && !layout.tiled && layout.planes === 1;
  const plain = merged ? { ...layout, chunkHeight: height } : layout;
  const chunks = expandChunks(merged ? [joined(parts)] : parts, plain, width, height);
  if (merged && layout.samplesPerPixel === 1) {
    unpackSamples(chunks[0]!, layout, height, width, out);
    pickChannel(out, layout, out);
  } else if (layout.planes > 1) placePlanes(chunks, layout, width, height, out);
  else placeChunks(chunks, plain, width, height, out);
}

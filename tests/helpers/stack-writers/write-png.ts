import { deflateSync } from 'node:zlib';
import { crc32 } from '@/stacks/crc32';
import { sampleBytes } from './sample-bytes';

export interface PngOptions {
  width: number;
  height: number;
  bits: 8 | 16;
  /** 0 grey, 2 RGB, 3 palette, 4 grey + alpha, 6 RGB + alpha. */
  colourType?: 0 | 2 | 3 | 4 | 6;
  /** Filter of each row by turns; 0 to 4. */
  filters?: readonly number[];
  palette?: readonly number[];
}

const CHANNELS = { 0: 1, 2: 3, 3: 1, 4: 2, 6: 4 } as const;

export function pngChunk(type: string, data: Uint8Array): Buffer {
  const body = Buffer.concat([Buffer.from(type, 'latin1'), data]);
  const out = Buffer.alloc(body.length + 8);
  out.writeUInt32BE(data.length, 0);
  body.copy(out, 4);
  out.writeUInt32BE(crc32(body), body.length + 4);
  return out;
}

/** Row filters as PNG (third edition, 9.2) defines them, from the unfiltered bytes. */
function filteredRow(rows: Buffer, row: number, size: number, step: number, filter: number): Buffer {
  const at = (r: number, i: number) => (r < 0 || i < 0 ? 0 : rows[r * size + i]!);
  const out = Buffer.alloc(size + 1);
  out[0] = filter;
  for (let i = 0; i < size; i++) {
    const [a, b, c] = [at(row, i - step), at(row - 1, i), i < step ? 0 : at(row - 1, i - step)];
    const nearest = [a, b, c].reduce(
      (best, v) => (Math.abs(a + b - c - v) < Math.abs(a + b - c - best) ? v : best),
      a,
    );
    out[i + 1] = at(row, i) - [0, a, b, (a + b) >> 1, nearest][filter]!;
  }
  return out;
}

/** @param samples as stored, channels (alpha too) interleaved */
export function writePng(samples: ArrayLike<number>, o: PngOptions): Buffer {
  const { width, height, bits, colourType = 0, filters = [0] } = o;
  const n = CHANNELS[colourType];
  const rows = sampleBytes(samples, width * n, { bits, kind: 'uint', littleEndian: false });
  const size = rows.length / height;
  const filtered = Array.from({ length: height }, (_, row) =>
    filteredRow(rows, row, size, (n * bits) / 8, filters[row % filters.length]!),
  );
  const header = Buffer.alloc(13);
  header.writeUInt32BE(width, 0);
  header.writeUInt32BE(height, 4);
  header[8] = bits;
  header[9] = colourType;
  return Buffer.concat([
    Buffer.from([0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a]),
    pngChunk('IHDR', header),
    ...(o.palette ? [pngChunk('PLTE', Buffer.from(o.palette))] : []),
    pngChunk('IDAT', deflateSync(Buffer.concat(filtered))),
    pngChunk('IEND', Buffer.alloc(0)),
  ]);
}

import { inflateSync } from 'node:zlib';
import { unpackSamples } from '../unpack-samples';
import { pngChunks } from './png-chunks';
import { pngChannels, type PngHeader, readPngHeader, storedSamples } from './png-header';
import { unfilter } from './unfilter';

/** Reduced pictures that a PNG file holds one after the other: start and step in x and y. */
interface Pass {
  x: number;
  y: number;
  dx: number;
  dy: number;
}

const WHOLE: readonly Pass[] = [{ x: 0, y: 0, dx: 1, dy: 1 }];
/** Adam7 (PNG third edition, 8.2). */
const ADAM7: readonly Pass[] = [
  { x: 0, y: 0, dx: 8, dy: 8 },
  { x: 4, y: 0, dx: 8, dy: 8 },
  { x: 0, y: 4, dx: 4, dy: 8 },
  { x: 2, y: 0, dx: 4, dy: 4 },
  { x: 0, y: 2, dx: 2, dy: 4 },
  { x: 1, y: 0, dx: 2, dy: 2 },
  { x: 0, y: 1, dx: 1, dy: 2 },
];

/** Passes that hold pixels, with their sizes. */
function passesOf({ width, height, interlaced }: PngHeader) {
  return (interlaced ? ADAM7 : WHOLE)
    .map((pass) => ({
      ...pass,
      columns: Math.max(0, Math.ceil((width - pass.x) / pass.dx)),
      rows: Math.max(0, Math.ceil((height - pass.y) / pass.dy)),
    }))
    .filter(({ columns, rows }) => columns > 0 && rows > 0);
}

/** Stored samples of the whole picture in rows, most significant byte first. */
function pictureBytes(filtered: Uint8Array, header: PngHeader): Uint8Array {
  const step = (storedSamples(header) * header.bits) / 8;
  const picture = new Uint8Array(header.width * header.height * step);
  let at = 0;
  for (const { x, y, dx, dy, columns, rows } of passesOf(header)) {
    const size = rows * (columns * step + 1);
    const plain = unfilter(filtered.subarray(at, at + size), rows, columns * step, step);
    at += size;
    if (!header.interlaced) return plain;
    for (let i = 0; i < rows * columns; i++) {
      const [row, column] = [Math.floor(i / columns), i % columns];
      const to = ((y + row * dy) * header.width + x + column * dx) * step;
      picture.set(plain.subarray(i * step, (i + 1) * step), to);
    }
  }
  return picture;
}

function colours(picture: Uint8Array, palette: Uint8Array | undefined): Float32Array {
  const out = new Float32Array(picture.length * 3);
  for (let i = 0; i < out.length; i++) {
    const value = palette?.[picture[Math.floor(i / 3)]! * 3 + (i % 3)];
    if (value === undefined) throw new RangeError('A PNG pixel has no palette entry.');
    out[i] = value;
  }
  return out;
}

/**
 * Samples of a PNG file as stored, colour channels interleaved, alpha left out; nothing is rescaled
 * and no colour profile applied. 8 and 16 bits.
 * @returns `width * height * channels` samples
 * @throws RangeError when the file is damaged or isn't of the size given.
 */
export function decodePng(file: Uint8Array, width: number, height: number): Float32Array {
  const header = readPngHeader(file);
  if (header?.width !== width || header.height !== height) {
    throw new RangeError('The PNG frame has another size than the stack.');
  }
  const chunks = pngChunks(file);
  const data = Buffer.concat(chunks.filter(({ type }) => type === 'IDAT').map((chunk) => chunk.data));
  const stored = storedSamples(header);
  const needed = passesOf(header).reduce(
    (sum, { columns, rows }) => sum + rows * (1 + (columns * stored * header.bits) / 8),
    0,
  );
  const filtered = inflateSync(data, { maxOutputLength: needed + 64 });
  if (filtered.byteLength < needed) throw new RangeError('The PNG data ends early.');
  const picture = pictureBytes(filtered, header);
  if (header.colourType === 3) return colours(picture, chunks.find(({ type }) => type === 'PLTE')?.data);
  const samples = new Float32Array(width * height * stored);
  const layout = {
    bits: header.bits,
    sampleKind: 'uint',
    littleEndian: false,
    samplesPerPixel: stored,
  } as const;
  unpackSamples(picture, layout, height, width, samples);
  const kept = pngChannels(header);
  if (kept === stored) return samples;
  return Float32Array.from(
    { length: width * height * kept },
    (_, i) => samples[Math.floor(i / kept) * stored + (i % kept)]!,
  );
}

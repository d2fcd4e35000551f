import { endianness } from 'node:os';
import { type FrameLayout } from './frame-layout';

type Layout = Pick<FrameLayout, 'bits' | 'sampleKind' | 'littleEndian'>;

const LITTLE_ENDIAN_HERE = endianness() === 'LE';

/**
 * The first `out.length` samples of 8, 16 or 32 bits as numbers. Samples as this machine keeps them are
 * converted as a whole, which is ten times as fast as one by one.
 */
export function wholeByteSamples(layout: Layout, bytes: Uint8Array, out: Float32Array): void {
  const size = layout.bits / 8;
  if (size > 1 && bytes.byteOffset % size !== 0) {
    oneByOne(layout, bytes, out);
    return;
  }
  const turned = size > 1 && layout.littleEndian !== LITTLE_ENDIAN_HERE;
  const used = bytes.subarray(0, size * out.length);
  if (turned) turnBytes(used, size);
  out.set(samplesOf(layout, used, out.length));
  // The bytes are the caller's.
  if (turned) turnBytes(used, size);
}

function samplesOf({ bits, sampleKind }: Layout, { buffer, byteOffset }: Uint8Array, count: number) {
  if (bits === 32) return new Float32Array(buffer, byteOffset, count);
  if (bits === 8) {
    return sampleKind === 'uint'
      ? new Uint8Array(buffer, byteOffset, count)
      : new Int8Array(buffer, byteOffset, count);
  }
  return sampleKind === 'int'
    ? new Int16Array(buffer, byteOffset, count)
    : new Uint16Array(buffer, byteOffset, count);
}

function turnBytes({ buffer, byteOffset, byteLength }: Uint8Array, size: number): void {
  const bytes = Buffer.from(buffer, byteOffset, byteLength);
  if (size === 2) bytes.swap16();
  else bytes.swap32();
}

function oneByOne({ bits, sampleKind, littleEndian }: Layout, bytes: Uint8Array, out: Float32Array): void {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const count = out.length;
  if (bits === 32) for (let i = 0; i < count; i++) out[i] = view.getFloat32(i * 4, littleEndian);
  else if (sampleKind === 'int') for (let i = 0; i < count; i++) out[i] = view.getInt16(i * 2, littleEndian);
  else for (let i = 0; i < count; i++) out[i] = view.getUint16(i * 2, littleEndian);
}

import { inflateSync } from 'node:zlib';
import { COMPRESSION } from '../frame-layout';
import { decodeLzw } from './lzw';
import { decodePackBits } from './packbits';

/** Some writers fill the last strip up to full height, or pad; more than this is not padding. */
const EXTRA_BYTES_MAX = 64 * 1024;

function inflate(input: Uint8Array, expected: number, full: number): Uint8Array {
  const out = inflateSync(input, { maxOutputLength: full + EXTRA_BYTES_MAX });
  return out.byteLength > expected ? out.subarray(0, expected) : out;
}

/**
 * The bytes of one strip or tile.
 * @param expected bytes that its rows need
 * @param full bytes of a strip or tile of full height
 * @returns at most `expected` bytes; fewer when the data ends early.
 * @throws when the compressed data is damaged. Output never grows past `full` and a little.
 */
export function decompress(
  input: Uint8Array,
  compression: number,
  expected: number,
  full = expected,
): Uint8Array {
  switch (compression) {
    case COMPRESSION.none:
      return input.byteLength > expected ? input.subarray(0, expected) : input;
    case COMPRESSION.packBits:
      return decodePackBits(input, expected);
    case COMPRESSION.lzw:
      return decodeLzw(input, expected);
    case COMPRESSION.deflate:
    case COMPRESSION.deflateOld:
      return inflate(input, expected, full);
    default:
      throw new RangeError(`Compression ${compression} has no decoder.`);
  }
}

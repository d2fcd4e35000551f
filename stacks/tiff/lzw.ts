const CLEAR = 256;
const END = 257;
const FIRST_FREE = 258;
const CODES = 4096;

/**
 * LZW of TIFF 6.0, section 13: codes of 9 to 12 bits, most significant bit first, each widening one
 * code early. Stops when `expected` bytes are out, so hostile input can't grow.
 *
 * Each table entry is a place in the output where its string already stands: entry `c` has its
 * `length[c]` bytes at `start[c]`, so no strings are stored.
 * @returns the bytes decoded: fewer than `expected` when the input ends early.
 * @throws RangeError on a code that is not in the table yet, or on the bit order of before TIFF 5.
 */
export function decodeLzw(input: Uint8Array, expected: number): Uint8Array {
  if (input[0] === 0 && input.length > 1 && (input[1]! & 1) === 1) {
    throw new RangeError('LZW codes are in the reversed bit order of old writers.');
  }
  const out = new Uint8Array(expected);
  const start = new Uint32Array(CODES);
  const length = new Uint32Array(CODES);
  let size = 0;
  let next = FIRST_FREE;
  let width = 9;
  let previousStart = -1;
  let previousLength = 0;
  let bits = 0;
  let held = 0;
  let at = 0;

  while (size < expected) {
    while (held < width && at < input.length) {
      bits = ((bits << 8) | input[at++]!) & 0xffffff;
      held += 8;
    }
    if (held < width) break;
    const code = (bits >>> (held - width)) & ((1 << width) - 1);
    held -= width;

    if (code === END) break;
    if (code === CLEAR) {
      next = FIRST_FREE;
      width = 9;
      previousStart = -1;
      continue;
    }

    const begin = size;
    if (code < CLEAR) {
      out[size++] = code;
    } else if (code < next) {
      const from = start[code]!;
      const run = Math.min(length[code]!, expected - size);
      out.copyWithin(size, from, from + run);
      size += run;
    } else if (code === next && previousStart >= 0) {
      // The string of this very step: the previous one and its own first byte.
      const run = Math.min(previousLength, expected - size);
      out.copyWithin(size, previousStart, previousStart + run);
      size += run;
      if (size < expected) out[size++] = out[previousStart]!;
    } else {
      throw new RangeError(`LZW code ${code} before its definition.`);
    }

    if (previousStart >= 0 && next < CODES) {
      // The previous string and the first byte after it, which stand next to each other in the output.
      start[next] = previousStart;
      length[next] = previousLength + 1;
      next++;
    }
    previousStart = begin;
    previousLength = size - begin;
    if (next >= (1 << width) - 1 && width < 12) width++;
  }
  return out.subarray(0, size);
}

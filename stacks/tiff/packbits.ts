/**
 * Byte run lengths as in TIFF 6.0, section 9. Stops when `expected` bytes are out.
 * @returns the bytes decoded: fewer than `expected` when the input ends early.
 */
export function decodePackBits(input: Uint8Array, expected: number): Uint8Array {
  const out = new Uint8Array(expected);
  let at = 0;
  let size = 0;
  while (size < expected && at < input.length) {
    const n = input[at++]!;
    if (n === 128) continue;
    if (n < 128) {
      const run = Math.min(n + 1, expected - size, input.length - at);
      out.set(input.subarray(at, at + run), size);
      at += n + 1;
      size += run;
    } else {
      if (at >= input.length) break;
      const run = Math.min(257 - n, expected - size);
      out.fill(input[at++]!, size, size + run);
      size += run;
    }
  }
  return out.subarray(0, size);
}

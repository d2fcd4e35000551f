/** Runs of three or more equal bytes are replicated, all else is literal (TIFF 6.0, section 9). */
export function encodePackBits(input: Uint8Array): Buffer {
  const out: number[] = [];
  const runAt = (at: number) => {
    let end = at;
    while (end < input.length && input[end] === input[at] && end - at < 128) end++;
    return end - at;
  };
  let at = 0;
  while (at < input.length) {
    const run = runAt(at);
    if (run >= 3) {
      out.push(257 - run, input[at]!);
      at += run;
      continue;
    }
    let end = at;
    while (end < input.length && end - at < 128 && runAt(end) < 3) end++;
    out.push(end - at - 1, ...input.subarray(at, end));
    at = end;
  }
  return Buffer.from(out);
}

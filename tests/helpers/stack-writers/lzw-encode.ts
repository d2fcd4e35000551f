/** Writes codes of 9 to 12 bits, most significant bit first. */
class BitWriter {
  readonly bytes: number[] = [];
  private held = 0;
  private bits = 0;

  put(code: number, width: number): void {
    this.held = (this.held << width) | code;
    this.bits += width;
    while (this.bits >= 8) {
      this.bits -= 8;
      this.bytes.push((this.held >>> this.bits) & 255);
      this.held &= (1 << this.bits) - 1;
    }
  }

  finish(): Buffer {
    if (this.bits > 0) this.put(0, 8 - this.bits);
    return Buffer.from(this.bytes);
  }
}

/** The compressor of TIFF 6.0, section 13, as its pseudocode has it: table of strings, clear at 4094 entries. */
export function encodeLzw(input: Uint8Array): Buffer {
  const out = new BitWriter();
  let table = new Map<string, number>();
  let next = 258;
  let width = 9;
  const codeOf = (string: string) => (string.length === 1 ? string.charCodeAt(0) : table.get(string)!);
  out.put(256, width);
  let omega = '';
  for (const byte of input) {
    const longer = omega + String.fromCharCode(byte);
    if (longer.length === 1 || table.has(longer)) {
      omega = longer;
      continue;
    }
    out.put(codeOf(omega), width);
    table.set(longer, next++);
    omega = String.fromCharCode(byte);
    // "as soon as we add table entry 511, switch to 10-bit codes"; clear as soon as entry 4094 is used.
    if (next === 4095) {
      out.put(256, width);
      [table, next, width] = [new Map(), 258, 9];
    } else if (next === 512 || next === 1024 || next === 2048) width++;
  }
  if (omega) {
    out.put(codeOf(omega), width);
    next++;
    if (next === 512 || next === 1024 || next === 2048) width++;
  }
  out.put(257, width);
  return out.finish();
}

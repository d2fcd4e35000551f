export interface SampleFormat {
  bits: number;
  kind: 'uint' | 'int' | 'float';
  littleEndian: boolean;
}

/** Rows of samples as bytes: packed most significant bit first, each row padded to a whole byte. */
export function sampleBytes(values: ArrayLike<number>, perRow: number, format: SampleFormat): Buffer {
  const { bits, kind, littleEndian } = format;
  const rows = values.length / perRow;
  const rowBytes = Math.ceil((perRow * bits) / 8);
  const out = Buffer.alloc(rows * rowBytes);
  const view = new DataView(out.buffer, out.byteOffset, out.byteLength);
  for (let i = 0; i < values.length; i++) {
    const value = values[i]!;
    const [row, column] = [Math.floor(i / perRow), i % perRow];
    const at = row * rowBytes + (column * bits) / 8;
    if (kind === 'float') view.setFloat32(at, value, littleEndian);
    else if (bits === 32) view.setUint32(at, value, littleEndian);
    else if (bits === 16) view.setUint16(at, value & 0xffff, littleEndian);
    else if (bits === 8) view.setUint8(at, value & 0xff);
    else {
      for (let b = 0; b < bits; b++) {
        const bit = column * bits + b;
        if ((value >> (bits - 1 - b)) & 1) out[row * rowBytes + (bit >> 3)]! |= 0x80 >> (bit & 7);
      }
    }
  }
  return out;
}

/** Horizontal differences of samples of 8 or 16 bits (predictor 2, TIFF 6.0 section 14). */
export function differenced(
  values: ArrayLike<number>,
  perRow: number,
  samplesPerPixel: number,
  bits: number,
): number[] {
  return Array.from(values, (value, i) =>
    i % perRow < samplesPerPixel ? value : (value - values[i - samplesPerPixel]!) & (2 ** bits - 1),
  );
}

/** Predictor 3 (TIFF Technical Note 3): bytes of a row sorted by significance, then differenced. */
export function floatDifferenced(values: ArrayLike<number>, perRow: number): Buffer {
  const big = sampleBytes(values, perRow, { bits: 32, kind: 'float', littleEndian: false });
  const out = Buffer.alloc(big.length);
  const size = perRow * 4;
  for (let row = 0; row < big.length / size; row++) {
    const sorted = Buffer.alloc(size);
    for (let i = 0; i < size; i++) sorted[(i % 4) * perRow + (i >> 2)] = big[row * size + i]!;
    for (let i = 0; i < size; i++) out[row * size + i] = sorted[i]! - (i === 0 ? 0 : sorted[i - 1]!);
  }
  return out;
}

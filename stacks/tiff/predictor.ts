/** Rows of samples as they come out of a decoder. */
export interface SampleRows {
  bytes: Uint8Array;
  rows: number;
  columns: number;
  samplesPerPixel: number;
  bits: number;
  littleEndian: boolean;
}

function sumBytes(bytes: Uint8Array, from: number, to: number, step: number): void {
  for (let i = from + step; i < to; i++) bytes[i] = bytes[i]! + bytes[i - step]!;
}

function sumWords({ bytes, littleEndian }: SampleRows, from: number, count: number, step: number): void {
  const view = new DataView(bytes.buffer, bytes.byteOffset + from, count * 2);
  for (let i = step; i < count; i++) {
    const sum = view.getUint16(i * 2, littleEndian) + view.getUint16((i - step) * 2, littleEndian);
    view.setUint16(i * 2, sum, littleEndian);
  }
}

function sumLongs({ bytes, littleEndian }: SampleRows, from: number, count: number, step: number): void {
  const view = new DataView(bytes.buffer, bytes.byteOffset + from, count * 4);
  for (let i = step; i < count; i++) {
    const sum = view.getUint32(i * 4, littleEndian) + view.getUint32((i - step) * 4, littleEndian);
    view.setUint32(i * 4, sum, littleEndian);
  }
}

/** Undoes horizontal differencing (predictor 2 of TIFF 6.0, section 14) in place. */
export function undoDifferences(samples: SampleRows): void {
  const count = samples.columns * samples.samplesPerPixel;
  const size = (count * samples.bits) / 8;
  for (let row = 0; row < samples.rows; row++) {
    const from = row * size;
    if (samples.bits === 8) sumBytes(samples.bytes, from, from + size, samples.samplesPerPixel);
    else if (samples.bits === 16) sumWords(samples, from, count, samples.samplesPerPixel);
    else sumLongs(samples, from, count, samples.samplesPerPixel);
  }
}

/**
 * Undoes the floating point predictor (predictor 3, TIFF Technical Note 3) in place: rows hold all
 * most significant bytes first, then the next ones, differenced by bytes. 32-bit samples only.
 */
export function undoFloatDifferences(samples: SampleRows): void {
  const { bytes, rows, columns, samplesPerPixel, littleEndian } = samples;
  const count = columns * samplesPerPixel;
  const size = count * 4;
  const row = new Uint8Array(size);
  for (let r = 0; r < rows; r++) {
    const from = r * size;
    sumBytes(bytes, from, from + size, samplesPerPixel);
    row.set(bytes.subarray(from, from + size));
    for (let i = 0; i < count; i++) {
      for (let b = 0; b < 4; b++) {
        bytes[from + i * 4 + (littleEndian ? 3 - b : b)] = row[b * count + i]!;
      }
    }
  }
}

/** What a PNG file says about its pixels (PNG third edition, 11.2.1). */
export interface PngHeader {
  width: number;
  height: number;
  bits: number;
  /** 0 grey, 2 RGB, 3 palette, 4 grey + alpha, 6 RGB + alpha. */
  colourType: number;
  interlaced: boolean;
}

/** Bytes of signature and first chunk, checksum included. */
export const PNG_HEADER_BYTES = 33;

const BIT_DEPTHS: Record<number, readonly number[]> = {
  0: [1, 2, 4, 8, 16],
  2: [8, 16],
  3: [1, 2, 4, 8],
  4: [8, 16],
  6: [8, 16],
};

/**
 * The header chunk, or null when the file's first 33 bytes are not those of a PNG file. Sizes are
 * not judged here.
 */
export function readPngHeader(bytes: Uint8Array): PngHeader | null {
  if (bytes.byteLength < PNG_HEADER_BYTES) return null;
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const isHeader = view.getUint32(8) === 13 && view.getUint32(12) === 0x49484452;
  const header = {
    width: view.getUint32(16),
    height: view.getUint32(20),
    bits: bytes[24]!,
    colourType: bytes[25]!,
    interlaced: bytes[28] === 1,
  };
  const known = bytes[26] === 0 && bytes[27] === 0 && bytes[28]! <= 1;
  return isHeader && known && BIT_DEPTHS[header.colourType]?.includes(header.bits) ? header : null;
}

/** Samples of a pixel as stored, alpha included. */
export function storedSamples({ colourType }: PngHeader): number {
  return { 0: 1, 2: 3, 3: 1, 4: 2, 6: 4 }[colourType] ?? 1;
}

/** Colour channels of a pixel: palettes have three, alpha is none. */
export function pngChannels({ colourType }: PngHeader): number {
  return colourType === 0 || colourType === 4 ? 1 : 3;
}

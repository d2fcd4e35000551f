export type SampleKind = 'uint' | 'int' | 'float';

/** TIFF's code of a codec that this project reads. Npy files count as uncompressed. */
export const COMPRESSION = { none: 1, lzw: 5, deflate: 8, deflateOld: 32946, packBits: 32773 } as const;

/** How the bytes of a frame become counts. Frames of a stack share few different layouts. */
export interface FrameLayout {
  container: 'raw' | 'png';
  /** Bits of a stored sample: 8, 10, 12, 14, 16 or 32. Samples are packed, rows padded to bytes. */
  bits: number;
  sampleKind: SampleKind;
  littleEndian: boolean;
  compression: number;
  /** 1 none, 2 horizontal differences, 3 floating point differences. */
  predictor: number;
  /** WhiteIsZero: counts are the largest sample minus the sample. */
  invert: boolean;
  /** Interleaved samples per pixel of a segment. */
  samplesPerPixel: number;
  /** Planes that follow each other in the segment table (1 when samples are interleaved). */
  planes: number;
  /** The channel that is read, or the mean of all. */
  channel: number | 'mean';
  /** Strips or tiles, as columns x rows; strips are as wide as the frame. */
  chunkWidth: number;
  chunkHeight: number;
  tiled: boolean;
  /** Counts of each palette entry, when samples are palette numbers. */
  palette: number[] | null;
}

/** Layout of a grey frame that lies uncompressed in one piece. */
export function plainLayout(
  width: number,
  height: number,
  sample: { bits: number; sampleKind: SampleKind; littleEndian: boolean },
): FrameLayout {
  return {
    container: 'raw',
    ...sample,
    compression: COMPRESSION.none,
    predictor: 1,
    invert: false,
    samplesPerPixel: 1,
    planes: 1,
    channel: 0,
    chunkWidth: width,
    chunkHeight: height,
    tiled: false,
    palette: null,
  };
}

/** Bytes of a row of `columns` pixels: rows begin at whole bytes. */
export function rowBytes(columns: number, layout: { bits: number; samplesPerPixel: number }): number {
  return Math.ceil((columns * layout.samplesPerPixel * layout.bits) / 8);
}

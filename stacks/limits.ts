/** Limits of what is accepted as a stack; each has its sentence among the refusals. */
export const STACK_LIMITS = {
  pages: 200_000,
  /** 64 megapixels, counted as 8192 x 8192. */
  pixelsPerPage: 64 * 1024 * 1024,
  /** More samples per pixel than this is no colour image but a damaged header. */
  samplesPerPixel: 16,
  descriptionBytes: 1024 * 1024,
  /** Strips or tiles of a whole stack: 16 bytes each in the index. */
  segments: 16_000_000,
  segmentsPerPage: 1_000_000,
  /** Different ways in which the pages of one stack may be stored. */
  layouts: 1_000,
  /** Strips and tiles looked at in all, merged ones too: bounds the time that page lists can take. */
  segmentsWalked: 400_000_000,
  /** Above this many bytes an archive entry may not expand more than `zipRatio`-fold. */
  zipRatioFromBytes: 10_000_000,
  zipRatio: 100,
} as const;

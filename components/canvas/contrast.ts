/** Counts between which a contrast bead can be moved. */
export interface CountRange {
  least: number;
  most: number;
}

/**
 * The range for a recording that opens with the contrast `low .. high`: half as wide again below,
 * twice as wide above, where bright spots are; never under zero or over what the camera can count.
 */
export function contrastRange(low: number, high: number, bitDepth: number | null): CountRange {
  const span = Math.max(high - low, 1e-6);
  const top = bitDepth !== null && bitDepth <= 16 ? 2 ** bitDepth - 1 : Infinity;
  const least = low >= 0 ? Math.max(0, low - span / 2) : low - span / 2;
  return { least, most: Math.max(high, Math.min(top, high + 2 * span)) };
}

/** A step for a key press: about a hundredth of the range, in whole counts where the range is wide. */
export function contrastStep({ least, most }: CountRange): number {
  const rough = (most - least) / 100;
  return rough >= 1 ? Math.round(rough) : rough;
}

/**
 * The contrast after moving one bead to `value`: black and white stay apart by at least a step, and
 * both stay in the range.
 */
export function moveBead(
  bead: 'low' | 'high',
  value: number,
  now: { low: number; high: number },
  range: CountRange,
): { low: number; high: number } {
  const step = contrastStep(range);
  const round = (count: number) => (step >= 1 ? Math.round(count) : count);
  if (bead === 'low') {
    return { low: round(Math.min(Math.max(value, range.least), now.high - step)), high: now.high };
  }
  return { low: now.low, high: round(Math.max(Math.min(value, range.most), now.low + step)) };
}

/**
 * Bins of an 8-bit picture that was drawn over the whole range, for the hill over the thread. The
 * first and last level also hold everything beyond, and are left out.
 *
 * @param rgba four bytes per pixel, grey.
 */
export function histogramOf(rgba: Uint8ClampedArray, bins: number): number[] {
  const counts = new Array<number>(bins).fill(0);
  for (let i = 0; i < rgba.length; i += 4) {
    const level = rgba[i];
    if (level > 0 && level < 255) counts[Math.floor((level * bins) / 256)] += 1;
  }
  return counts;
}

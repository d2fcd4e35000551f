import type { BlockGrid } from './block-grid';

/** Value of the parabola that fits five evenly spaced values best, at the middle one (Savitzky & Golay, 1964). */
const WEIGHTS = [17 / 35, 12 / 35, -3 / 35];
/** Variance of a value less its smoothed one, in units of the value's own. */
const LEFT_VARIANCE = 1 - WEIGHTS[0] ** 2;
const CHANCE_SIGMAS = 3.5;
/**
 * Where the background is curved, with second difference d from block to block, the mean over a block
 * is d / 24 above the value in its middle, and straight lines between middles lie d / 12 above the
 * curve on average.
 */
const CURVE_SHARE = 1 / 24 + 1 / 12;

/**
 * Block means of a smooth background as values to draw straight lines between: less noisy, and
 * lowered where the lines would run above a curve. Parabolas over 5 x 5 blocks, except where the
 * value is farther from them than chance allows, as at the edge of a shadow. Tables of fewer than
 * five blocks along an axis are left as they are along it.
 *
 * @param variance of each value by chance.
 */
export function smoothTable(values: Float64Array, variance: Float64Array, grid: BlockGrid): Float64Array {
  const { columns, rows } = grid;
  const across = columns < 5 ? values : alongAxis(values, columns, rows, 1, columns);
  const smooth = rows < 5 ? across : alongAxis(across, rows, columns, columns, 1);
  return smooth.map((value, b) => {
    const off = values[b] - value;
    if (off * off > CHANCE_SIGMAS * CHANCE_SIGMAS * LEFT_VARIANCE * variance[b]) return values[b];
    const column = b % columns;
    let curve = 0;
    if (column > 0 && column < columns - 1) curve += smooth[b - 1] + smooth[b + 1] - 2 * value;
    if (b >= columns && b < columns * (rows - 1))
      curve += smooth[b - columns] + smooth[b + columns] - 2 * value;
    return value - CURVE_SHARE * curve;
  });
}

function alongAxis(
  values: Float64Array,
  length: number,
  lines: number,
  step: number,
  lineStep: number,
): Float64Array {
  const out = new Float64Array(values.length);
  for (let line = 0; line < lines; line++) {
    const start = line * lineStep;
    // Beyond the ends the line through the last two values goes on.
    const at = (i: number) => {
      if (i < 0) return values[start] + i * (values[start + step] - values[start]);
      const last = start + (length - 1) * step;
      if (i >= length) return values[last] + (i - length + 1) * (values[last] - values[last - step]);
      return values[start + i * step];
    };
    for (let i = 0; i < length; i++) {
      const near = at(i - 1) + at(i + 1);
      const far = at(i - 2) + at(i + 2);
      out[start + i * step] = WEIGHTS[0] * at(i) + WEIGHTS[1] * near + WEIGHTS[2] * far;
    }
  }
  return out;
}

/** A numeric axis in the unit that is printed. A log axis needs `min` > 0. */
export interface AxisRange {
  min: number;
  max: number;
  log?: boolean;
}

export interface AxisTicks {
  major: number[];
  minor: number[];
}

const tidy = (value: number) => Number(value.toPrecision(12));

/** A round step, 1, 2 or 5 times a power of ten, that cuts a span into about `parts`. */
export function roundStep(span: number, parts: number): number {
  const rough = span / Math.max(1, parts);
  const power = 10 ** Math.floor(Math.log10(rough));
  return tidy(([1, 2, 5].find((m) => m * power >= rough * 0.999) ?? 10) * power);
}

/** Ticks of an axis: round steps with minor ones between; on a log axis decades, and 2..9 between. */
export function axisTicks({ min, max, log }: AxisRange, parts = 5): AxisTicks {
  return log ? logTicks(min, max) : linearTicks(min, max, parts);
}

function linearTicks(min: number, max: number, parts: number): AxisTicks {
  const step = roundStep(max - min, parts);
  const perStep = String(step)
    .replace(/[0.e+-]/g, '')
    .startsWith('2')
    ? 4
    : 5;
  const small = step / perStep;
  const major: number[] = [];
  const minor: number[] = [];
  for (let i = Math.ceil(min / small - 1e-9); i <= Math.floor(max / small + 1e-9); i += 1) {
    (i % perStep === 0 ? major : minor).push(tidy(i * small));
  }
  return { major, minor };
}

/** Below so many decades their powers alone leave an axis bare, and 2 and 5 are named too. */
const BARE_DECADES = 2;

/** True where ticks of a log axis are powers of ten alone, and are written so. */
export const showsPowers = ({ min, max, log }: AxisRange): boolean =>
  !!log && Math.log10(max / min) >= BARE_DECADES;

function logTicks(min: number, max: number): AxisTicks {
  const named = showsPowers({ min, max, log: true }) ? [1] : [1, 2, 5];
  const major: number[] = [];
  const minor: number[] = [];
  for (let decade = Math.floor(Math.log10(min)); decade <= Math.log10(max) + 1e-9; decade += 1) {
    for (let m = 1; m < 10; m += 1) {
      const value = tidy(m * 10 ** decade);
      if (value < min * 0.999999 || value > max * 1.000001) continue;
      (named.includes(m) ? major : minor).push(value);
    }
  }
  return { major, minor };
}

/** Below any value in any unit of this product. */
const TINY = 1e-200;

/** Round ends around data, a little room left: `paddedRange(0.3, 97)` -> 0 ... 100. */
export function paddedRange(low: number, high: number, parts = 5): AxisRange {
  const size = Math.max(Math.abs(low), Math.abs(high));
  // A span lost in the rounding of its own ends has no steps to show.
  if (!(high - low > Math.max(1e-9 * size, TINY))) {
    const half = size > TINY ? size / 2 : 1;
    return paddedRange(low - half, high + half, parts);
  }
  const step = roundStep(high - low, parts);
  return { min: tidy(Math.floor(low / step) * step), max: tidy(Math.ceil(high / step) * step) };
}

/** Whole decades around positive data; null when none is positive. */
export function decadeRange(values: readonly number[]): AxisRange | null {
  const positive = values.filter((value) => value > 0 && Number.isFinite(value));
  if (positive.length === 0) return null;
  const min = Math.floor(Math.log10(positive.reduce((a, b) => Math.min(a, b))) + 1e-9);
  const max = Math.ceil(Math.log10(positive.reduce((a, b) => Math.max(a, b))) - 1e-9);
  return { min: tidy(10 ** min), max: tidy(10 ** (max > min ? max : min + 1)), log: true };
}

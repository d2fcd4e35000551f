// What measuring the image does with the pixels of a pair of frames; see `image-model/pair-scan.ts`.

/** Highest count that is a number, f32, and how many pixels have it, i32. */
@unmanaged
export class Highest {
  count: f32 = 0;
  pixels: i32 = 0;
}

/**
 * One row of both frames: what stands above the level, by bin of 2 px, and its sums by pixel. Pixels without
 * a number count as nothing, and their bins are not quiet.
 *
 * @param first f32 @param second f32 @param level f32
 * @param sum f32 @param squares f32, both added to
 * @param excessA f32 @param excessB f32, bins of the row, added to @param quiet u8, bins of the row
 */
export function scanRow(
  first: usize,
  second: usize,
  level: usize,
  pixels: i32,
  shiftA: f32,
  shiftB: f32,
  sum: usize,
  squares: usize,
  excessA: usize,
  excessB: usize,
  quiet: usize,
  highest: Highest,
): void {
  const shiftsA = f32x4.splat(shiftA);
  const shiftsB = f32x4.splat(shiftB);
  const half = f32x4.splat(0.5);
  let x = 0;
  for (; x + 8 <= pixels; x += 8) {
    const at = (<usize>x) << 2;
    const a0 = v128.load(first + at);
    const a1 = v128.load(first + at, 16);
    const b0 = v128.load(second + at);
    const b1 = v128.load(second + at, 16);
    const l0 = v128.load(level + at);
    const l1 = v128.load(level + at, 16);
    const offA0 = f32x4.sub(f32x4.sub(a0, l0), shiftsA);
    const offA1 = f32x4.sub(f32x4.sub(a1, l1), shiftsA);
    const offB0 = f32x4.sub(f32x4.sub(b0, l0), shiftsB);
    const offB1 = f32x4.sub(f32x4.sub(b1, l1), shiftsB);
    const most = f32x4.splat(highest.count);
    const high0 = v128.or(f32x4.ge(a0, most), f32x4.ge(b0, most));
    const high1 = v128.or(f32x4.ge(a1, most), f32x4.ge(b1, most));
    // A difference to itself that isn't 0 tells of infinity or no number.
    const sum0 = f32x4.add(offA0, offB0);
    const sum1 = f32x4.add(offA1, offB1);
    const odd0 = f32x4.ne(f32x4.sub(sum0, sum0), f32x4.splat(0));
    const odd1 = f32x4.ne(f32x4.sub(sum1, sum1), f32x4.splat(0));
    // Nearly always there is neither a new highest count nor a pixel without a number.
    if (v128.any_true(v128.or(v128.or(high0, high1), v128.or(odd0, odd1)))) {
      scanPixels(
        first,
        second,
        level,
        x,
        x + 8,
        shiftA,
        shiftB,
        sum,
        squares,
        excessA,
        excessB,
        quiet,
        highest,
      );
      continue;
    }
    addTo(sum + at, f32x4.mul(sum0, half));
    addTo(sum + at + 16, f32x4.mul(sum1, half));
    const squares0 = f32x4.add(f32x4.mul(offA0, offA0), f32x4.mul(offB0, offB0));
    const squares1 = f32x4.add(f32x4.mul(offA1, offA1), f32x4.mul(offB1, offB1));
    addTo(squares + at, f32x4.mul(squares0, half));
    addTo(squares + at + 16, f32x4.mul(squares1, half));
    const bin = (<usize>x) << 1;
    addTo(excessA + bin, pairsOf(offA0, offA1));
    addTo(excessB + bin, pairsOf(offB0, offB1));
  }
  scanPixels(first, second, level, x, pixels, shiftA, shiftB, sum, squares, excessA, excessB, quiet, highest);
}

function addTo(at: usize, value: v128): void {
  v128.store(at, f32x4.add(v128.load(at), value));
}

/** Sums of neighbours: 8 pixels make 4 bins. */
function pairsOf(left: v128, right: v128): v128 {
  return f32x4.add(v128.shuffle<f32>(left, right, 0, 2, 4, 6), v128.shuffle<f32>(left, right, 1, 3, 5, 7));
}

/** As `scanRow`, for pixels `from .. to - 1`, whatever they hold. */
function scanPixels(
  first: usize,
  second: usize,
  level: usize,
  from: i32,
  to: i32,
  shiftA: f32,
  shiftB: f32,
  sum: usize,
  squares: usize,
  excessA: usize,
  excessB: usize,
  quiet: usize,
  highest: Highest,
): void {
  for (let x = from; x < to; x++) {
    const at = (<usize>x) << 2;
    const bin = (<usize>x) >> 1;
    const a = load<f32>(first + at);
    const b = load<f32>(second + at);
    takeHighest(a, highest);
    takeHighest(b, highest);
    let offA = a - load<f32>(level + at) - shiftA;
    let offB = b - load<f32>(level + at) - shiftB;
    if (offA - offA !== 0) {
      store<u8>(quiet + bin, 0);
      offA = 0;
    }
    if (offB - offB !== 0) {
      store<u8>(quiet + bin, 0);
      offB = 0;
    }
    const toBin = bin << 2;
    store<f32>(excessA + toBin, load<f32>(excessA + toBin) + offA);
    store<f32>(excessB + toBin, load<f32>(excessB + toBin) + offB);
    store<f32>(sum + at, load<f32>(sum + at) + <f32>0.5 * (offA + offB));
    store<f32>(squares + at, load<f32>(squares + at) + <f32>0.5 * (offA * offA + offB * offB));
  }
}

function takeHighest(value: f32, highest: Highest): void {
  if (value > highest.count && value < Infinity) {
    highest.count = value;
    highest.pixels = 0;
  }
  if (value === highest.count) highest.pixels++;
}

/**
 * Goes through a pair of frames once.
 *
 * @param first f32 @param second f32 @param level f32, by pixel
 * @param suspect f32, by bin: sum of 2 x 2 bins from which a tracer is suspected
 * @param sum f32 @param squares f32, by pixel, added to
 * @param excessA f32 @param excessB f32, by bin, out
 * @param quiet u8, by bin, out: 1 where neither frame shows a tracer, else 0
 * @param quietSum f32 @param quietPairs u8, by bin, added to
 * @param highest address of `Highest`
 */
export function scanPair(
  first: usize,
  second: usize,
  level: usize,
  width: i32,
  height: i32,
  shiftA: f32,
  shiftB: f32,
  alone: i32,
  suspect: usize,
  reachBins: i32,
  sum: usize,
  squares: usize,
  excessA: usize,
  excessB: usize,
  quiet: usize,
  quietSum: usize,
  quietPairs: usize,
  highest: usize,
): void {
  const columns = (width + 1) >> 1;
  const rows = (height + 1) >> 1;
  const bins = columns * rows;
  memory.fill(excessA, 0, bins << 2);
  memory.fill(excessB, 0, bins << 2);
  memory.fill(quiet, 1, bins);
  for (let y = 0; y < height; y++) {
    const far = (<usize>y * <usize>width) << 2;
    const bin = <usize>(y >> 1) * <usize>columns;
    scanRow(
      first + far,
      second + far,
      level + far,
      width,
      shiftA,
      shiftB,
      sum + far,
      squares + far,
      excessA + (bin << 2),
      excessB + (bin << 2),
      quiet + bin,
      changetype<Highest>(highest),
    );
  }
  clearSuspects(excessA, suspect, columns, rows, reachBins, quiet);
  if (!alone) clearSuspects(excessB, suspect, columns, rows, reachBins, quiet);
  addQuiet(excessA, excessB, quiet, bins, quietSum, quietPairs);
}

/** Sets bins aside that are near four in a square whose sum reaches `suspect`. */
function clearSuspects(
  excess: usize,
  suspect: usize,
  columns: i32,
  rows: i32,
  reach: i32,
  quiet: usize,
): void {
  // In images of a single row or column of bins, that one counts twice.
  const rowsSeen = max(1, rows - 1);
  const columnsSeen = max(1, columns - 1);
  const below = rows > 1 ? (<usize>columns) << 2 : 0;
  const beside: usize = columns > 1 ? 4 : 0;
  for (let r = 0; r < rowsSeen; r++) {
    const row = (<usize>r * <usize>columns) << 2;
    let c = 0;
    for (; c + 4 < columns; c += 4) {
      const at = excess + row + ((<usize>c) << 2);
      const here = f32x4.add(v128.load(at), v128.load(at + below));
      const after = f32x4.add(v128.load(at, 4), v128.load(at + below, 4));
      const bright = f32x4.ge(f32x4.add(here, after), v128.load(suspect + row + ((<usize>c) << 2)));
      if (!v128.any_true(bright)) continue;
      let found = i32x4.bitmask(bright);
      while (found) {
        clearBox(c + ctz(found), r, columns, rows, reach, quiet);
        found &= found - 1;
      }
    }
    for (; c < columnsSeen; c++) {
      const at = excess + row + ((<usize>c) << 2);
      const here = load<f32>(at) + load<f32>(at + below);
      const after = load<f32>(at + beside) + load<f32>(at + below + beside);
      if (here + after >= load<f32>(suspect + row + ((<usize>c) << 2))) {
        clearBox(c, r, columns, rows, reach, quiet);
      }
    }
  }
}

/** Clears bins around the square whose upper left bin is (column, row). */
function clearBox(column: i32, row: i32, columns: i32, rows: i32, reach: i32, quiet: usize): void {
  const left = max(0, column - reach);
  const right = min(columns - 1, column + 1 + reach);
  const bottom = min(rows - 1, row + 1 + reach);
  for (let r = max(0, row - reach); r <= bottom; r++) {
    memory.fill(quiet + <usize>(r * columns + left), 0, right - left + 1);
  }
}

/** Adds the mean of both frames and one pair to every quiet bin. */
function addQuiet(
  excessA: usize,
  excessB: usize,
  quiet: usize,
  bins: i32,
  quietSum: usize,
  quietPairs: usize,
): void {
  const half = f32x4.splat(0.5);
  // Tables reach to the next multiple of 4 bins and beyond.
  for (let i: usize = 0; i < <usize>bins; i += 4) {
    const marks = i32x4.extend_low_i16x8_u(i16x8.extend_low_i8x16_u(v128.load32_zero(quiet + i)));
    const mask = i32x4.ne(marks, i32x4.splat(0));
    const at = i << 2;
    const mean = f32x4.mul(half, f32x4.add(v128.load(excessA + at), v128.load(excessB + at)));
    v128.store(quietSum + at, f32x4.add(v128.load(quietSum + at), v128.and(mean, mask)));
  }
  for (let i: usize = 0; i < <usize>bins; i += 16) {
    v128.store(quietPairs + i, i8x16.add(v128.load(quietPairs + i), v128.load(quiet + i)));
  }
}

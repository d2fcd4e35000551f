/** Numbers per block that `sumBlock` writes. */
const SUMS = 8;

/**
 * For one row of bins: per pixel of a row all bits set where its bin is quiet, none elsewhere.
 *
 * @param quiet u8, bins of the row @param mask i32 per pixel, out, up to 15 behind the last
 */
export function spreadQuiet(quiet: usize, pixels: i32, mask: usize): void {
  for (let x: usize = 0; x < <usize>pixels; x += 16) {
    const bins = v128.load64_zero(quiet + (x >> 1));
    // Every bin twice; 1 becomes all bits.
    const twice = i8x16.neg(v128.shuffle<u8>(bins, bins, 0, 0, 1, 1, 2, 2, 3, 3, 4, 4, 5, 5, 6, 6, 7, 7));
    const low = i16x8.extend_low_i8x16_s(twice);
    const high = i16x8.extend_high_i8x16_s(twice);
    const at = mask + (x << 2);
    v128.store(at, i32x4.extend_low_i16x8_s(low));
    v128.store(at, i32x4.extend_high_i16x8_s(low), 16);
    v128.store(at, i32x4.extend_low_i16x8_s(high), 32);
    v128.store(at, i32x4.extend_high_i16x8_s(high), 48);
  }
}

/**
 * Sums over the quiet pixels of one block: their number, what both frames are above level and shift, its
 * squares and cubes, and the squares of the differences.
 *
 * @param first f32 @param second f32 @param level f32, at the block's upper left pixel @param mask i32, there
 * too, one row of pixels for every row of the block @param stride bytes from row to row
 * @param out f64, 8 numbers
 */
export function sumBlock(
  first: usize,
  second: usize,
  level: usize,
  mask: usize,
  stride: usize,
  maskStride: usize,
  columns: i32,
  rows: i32,
  shiftA: f32,
  shiftB: f32,
  out: usize,
): void {
  const shiftsA = f32x4.splat(shiftA);
  const shiftsB = f32x4.splat(shiftB);
  const lanes = i32x4(0, 1, 2, 3);
  let n = i32x4.splat(0);
  let sumA = f32x4.splat(0);
  let sumB = f32x4.splat(0);
  let squaresA = f32x4.splat(0);
  let squaresB = f32x4.splat(0);
  let cubesA = f32x4.splat(0);
  let cubesB = f32x4.splat(0);
  let differences2 = f32x4.splat(0);
  for (let y = 0; y < rows; y++) {
    for (let x = 0; x < columns; x += 4) {
      const at = (<usize>x) << 2;
      const inside = i32x4.lt_s(lanes, i32x4.splat(columns - x));
      const seen = v128.and(v128.load(mask + at), inside);
      const expected = v128.load(level + at);
      const offA = f32x4.sub(f32x4.sub(v128.load(first + at), expected), shiftsA);
      const offB = f32x4.sub(f32x4.sub(v128.load(second + at), expected), shiftsB);
      // Pixels without a number are never quiet.
      const a = v128.and(offA, seen);
      const b = v128.and(offB, seen);
      const aa = f32x4.mul(a, a);
      const bb = f32x4.mul(b, b);
      const d = f32x4.sub(a, b);
      n = i32x4.sub(n, seen);
      sumA = f32x4.add(sumA, a);
      sumB = f32x4.add(sumB, b);
      squaresA = f32x4.add(squaresA, aa);
      squaresB = f32x4.add(squaresB, bb);
      cubesA = f32x4.add(cubesA, f32x4.mul(aa, a));
      cubesB = f32x4.add(cubesB, f32x4.mul(bb, b));
      differences2 = f32x4.add(differences2, f32x4.mul(d, d));
    }
    first += stride;
    second += stride;
    level += stride;
    mask += maskStride;
  }
  store<f64>(out, <f64>total(f32x4.convert_i32x4_s(n)));
  store<f64>(out, total(sumA), 8);
  store<f64>(out, total(sumB), 16);
  store<f64>(out, total(squaresA), 24);
  store<f64>(out, total(squaresB), 32);
  store<f64>(out, total(cubesA), 40);
  store<f64>(out, total(cubesB), 48);
  store<f64>(out, total(differences2), 56);
}

function total(v: v128): f64 {
  const low = f64x2.promote_low_f32x4(v);
  const high = f64x2.promote_low_f32x4(v128.shuffle<f32>(v, v, 2, 3, 0, 1));
  const both = f64x2.add(low, high);
  return f64x2.extract_lane(both, 0) + f64x2.extract_lane(both, 1);
}

/**
 * Sums of every block of a pair of frames; see `sumBlock`. Block b along an axis begins at pixel
 * floor(b * pixels / blocks).
 *
 * @param quiet u8 by bin @param mask i32, room for as many rows as a block has, `maskWidth` pixels each
 * @param out f64, 8 numbers per block, row by row
 */
export function sumBlocks(
  first: usize,
  second: usize,
  level: usize,
  width: i32,
  height: i32,
  columns: i32,
  rows: i32,
  shiftA: f32,
  shiftB: f32,
  quiet: usize,
  mask: usize,
  maskWidth: i32,
  out: usize,
): void {
  const binColumns = (width + 1) >> 1;
  const maskStride = (<usize>maskWidth) << 2;
  for (let r = 0; r < rows; r++) {
    const y0 = <i32>((<i64>r * height) / rows);
    const y1 = <i32>((<i64>(r + 1) * height) / rows);
    for (let y = y0; y < y1; y++) {
      const to = mask + <usize>(y - y0) * maskStride;
      if (y > y0 && y >> 1 === (y - 1) >> 1) memory.copy(to, to - maskStride, maskStride);
      else spreadQuiet(quiet + <usize>(y >> 1) * <usize>binColumns, width, to);
    }
    for (let c = 0; c < columns; c++) {
      const x0 = <i32>((<i64>c * width) / columns);
      const x1 = <i32>((<i64>(c + 1) * width) / columns);
      const at = (<usize>y0 * <usize>width + <usize>x0) << 2;
      sumBlock(
        first + at,
        second + at,
        level + at,
        mask + ((<usize>x0) << 2),
        (<usize>width) << 2,
        maskStride,
        x1 - x0,
        y1 - y0,
        shiftA,
        shiftB,
        out,
      );
      out += SUMS << 3;
    }
  }
}

// Both passes work on 16 pixels at a time, tap by tap, so that the sums stay in registers.

/**
 * Correlates a row with a symmetric kernel.
 *
 * @param row f32; `reach` zeros stand before it and after its last pixel
 * @param weights f32 at distance 0 .. reach @param correction f32 factor per pixel of the result
 * @param out f32 @param pixels multiple of 16
 */
export function correlateRow(
  row: usize,
  weights: usize,
  reach: i32,
  correction: usize,
  out: usize,
  pixels: i32,
): void {
  const end = out + ((<usize>pixels) << 2);
  const last = weights + ((<usize>reach) << 2);
  while (out < end) {
    const middle = v128.load32_splat(weights);
    let a = f32x4.mul(v128.load(row), middle);
    let b = f32x4.mul(v128.load(row, 16), middle);
    let c = f32x4.mul(v128.load(row, 32), middle);
    let d = f32x4.mul(v128.load(row, 48), middle);
    let left = row;
    let right = row;
    for (let tap = weights + 4; tap <= last; tap += 4) {
      left -= 4;
      right += 4;
      const weight = v128.load32_splat(tap);
      a = f32x4.add(a, f32x4.mul(f32x4.add(v128.load(left), v128.load(right)), weight));
      b = f32x4.add(b, f32x4.mul(f32x4.add(v128.load(left, 16), v128.load(right, 16)), weight));
      c = f32x4.add(c, f32x4.mul(f32x4.add(v128.load(left, 32), v128.load(right, 32)), weight));
      d = f32x4.add(d, f32x4.mul(f32x4.add(v128.load(left, 48), v128.load(right, 48)), weight));
    }
    v128.store(out, f32x4.mul(a, v128.load(correction)));
    v128.store(out, f32x4.mul(b, v128.load(correction, 16)), 16);
    v128.store(out, f32x4.mul(c, v128.load(correction, 32)), 32);
    v128.store(out, f32x4.mul(d, v128.load(correction, 48)), 48);
    row += 64;
    correction += 64;
    out += 64;
  }
}

/**
 * Correlates columns with a symmetric kernel; one row of the result.
 *
 * @param row f32, the row in the middle; `reach` rows lie before and after it, `stride` bytes apart
 * @param weights f32 at distance 0 .. reach @param correction factor of the result
 * @param out f32, reaching to the next multiple of 16 pixels
 */
export function correlateColumns(
  row: usize,
  stride: i32,
  weights: usize,
  reach: i32,
  correction: f32,
  out: usize,
  pixels: i32,
): void {
  const factor = f32x4.splat(correction);
  const end = out + ((<usize>pixels) << 2);
  const last = weights + ((<usize>reach) << 2);
  while (out < end) {
    const middle = v128.load32_splat(weights);
    let a = f32x4.mul(v128.load(row), middle);
    let b = f32x4.mul(v128.load(row, 16), middle);
    let c = f32x4.mul(v128.load(row, 32), middle);
    let d = f32x4.mul(v128.load(row, 48), middle);
    let up = row;
    let down = row;
    for (let tap = weights + 4; tap <= last; tap += 4) {
      up -= stride;
      down += stride;
      const weight = v128.load32_splat(tap);
      a = f32x4.add(a, f32x4.mul(f32x4.add(v128.load(up), v128.load(down)), weight));
      b = f32x4.add(b, f32x4.mul(f32x4.add(v128.load(up, 16), v128.load(down, 16)), weight));
      c = f32x4.add(c, f32x4.mul(f32x4.add(v128.load(up, 32), v128.load(down, 32)), weight));
      d = f32x4.add(d, f32x4.mul(f32x4.add(v128.load(up, 48), v128.load(down, 48)), weight));
    }
    v128.store(out, f32x4.mul(a, factor));
    v128.store(out, f32x4.mul(b, factor), 16);
    v128.store(out, f32x4.mul(c, factor), 32);
    v128.store(out, f32x4.mul(d, factor), 48);
    row += 64;
    out += 64;
  }
}

/**
 * Photoelectrons of camera counts, (counts - offset) * perCount, and which pixels can be used: those that
 * are not bad and hold a finite number. Unusable pixels get 0 electrons.
 *
 * @param counts f32 per pixel @param bad u8 per pixel @param electrons f32 per pixel, out
 * @param usable u8 per pixel, out @param pixels rounded up to a multiple of 4 by the caller
 */
export function toElectrons(
  counts: usize,
  bad: usize,
  electrons: usize,
  usable: usize,
  pixels: i32,
  offset: f32,
  perCount: f32,
): void {
  const zero = f32x4.splat(0);
  const shift = f32x4.splat(offset);
  const scale = f32x4.splat(perCount);
  for (let i: usize = 0; i < <usize>pixels; i += 4) {
    const e = f32x4.mul(f32x4.sub(v128.load(counts + (i << 2)), shift), scale);
    const marks = i16x8.extend_low_i8x16_u(v128.load32_zero(bad + i));
    const fine = i32x4.eq(i32x4.extend_low_i16x8_u(marks), i32x4.splat(0));
    // Infinite or not a number: e - e is not 0.
    const good = v128.and(f32x4.eq(f32x4.sub(e, e), zero), fine);
    v128.store(electrons + (i << 2), v128.and(e, good));
    const ones = v128.and(good, i32x4.splat(1));
    const halves = i16x8.narrow_i32x4_u(ones, ones);
    store<u32>(usable + i, i32x4.extract_lane(i8x16.narrow_i16x8_u(halves, halves), 0));
  }
}

/**
 * Photoelectrons of camera counts, (counts - offset) * perCount, and which pixels count: those that are not
 * bad, hold a finite number and are darker than a saturated pixel. Pixels that are bad or hold no finite
 * number get 0 electrons.
 *
 * @param counts f32 per pixel @param bad u8 per pixel @param electrons f32 per pixel, out
 * @param usable u8 per pixel, out @param pixels all arrays reach to the next multiple of 16
 */
export function toElectrons(
  counts: usize,
  bad: usize,
  electrons: usize,
  usable: usize,
  pixels: i32,
  offset: f32,
  perCount: f32,
  saturation: f32,
): void {
  const shift = f32x4.splat(offset);
  const scale = f32x4.splat(perCount);
  const end = electrons + ((<usize>pixels) << 2);
  while (electrons < end) {
    const fine = i8x16.eq(v128.load(bad), i8x16.splat(0));
    const low = i16x8.extend_low_i8x16_s(fine);
    const high = i16x8.extend_high_i8x16_s(fine);
    const a = convert(counts, 0, shift, scale, i32x4.extend_low_i16x8_s(low), electrons, saturation);
    const b = convert(counts, 16, shift, scale, i32x4.extend_high_i16x8_s(low), electrons, saturation);
    const c = convert(counts, 32, shift, scale, i32x4.extend_low_i16x8_s(high), electrons, saturation);
    const d = convert(counts, 48, shift, scale, i32x4.extend_high_i16x8_s(high), electrons, saturation);
    const marks = i8x16.narrow_i16x8_s(i16x8.narrow_i32x4_s(a, b), i16x8.narrow_i32x4_s(c, d));
    v128.store(usable, v128.and(marks, i8x16.splat(1)));
    counts += 64;
    electrons += 64;
    bad += 16;
    usable += 16;
  }
}

/** Stores the electrons of 4 pixels; all bits of a lane are set where the pixel counts. */
function convert(
  counts: usize,
  at: usize,
  shift: v128,
  scale: v128,
  fine: v128,
  electrons: usize,
  saturation: f32,
): v128 {
  const e = f32x4.mul(f32x4.sub(v128.load(counts + at), shift), scale);
  // Infinite or not a number: e - e is not 0.
  const good = v128.and(f32x4.eq(f32x4.sub(e, e), f32x4.splat(0)), fine);
  const stored = v128.and(e, good);
  v128.store(electrons + at, stored);
  return v128.and(good, f32x4.lt(stored, f32x4.splat(saturation)));
}

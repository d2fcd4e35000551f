/**
 * Every `stride`-th pixel that is usable, in photoelectrons, packed.
 *
 * @param electronsOut f32 @param backgroundOut f32, each with room for all pixels looked at
 * @returns number of pixels packed
 */
export function gatherLight(
  counts: usize,
  bad: usize,
  background: usize,
  pixels: i32,
  stride: i32,
  offset: f32,
  perCount: f32,
  saturation: f32,
  electronsOut: usize,
  backgroundOut: usize,
): i32 {
  let count: usize = 0;
  for (let i: usize = 0; i < <usize>pixels; i += stride) {
    const e = (load<f32>(counts + (i << 2)) - offset) * perCount;
    store<f32>(electronsOut + (count << 2), e);
    store<f32>(backgroundOut + (count << 2), load<f32>(background + (i << 2)));
    count += <usize>(load<u8>(bad + i) === 0 && e - e === 0 && e < saturation);
  }
  return <i32>count;
}

/**
 * Sums over the samples whose electrons lie within `clip` variances of scale * background + shift, all in
 * 64 bits, so that the same samples are kept as in the plain kernel.
 *
 * @param sums f64, out: electrons, background, number of samples kept
 */
export function lightSums(
  electrons: usize,
  background: usize,
  count: i32,
  scale: f64,
  shift: f64,
  readVariance: f64,
  clip: f64,
  sums: usize,
): void {
  let light = f64x2.splat(0);
  let expected = f64x2.splat(0);
  let kept = i64x2.splat(0);
  const pairs = <usize>(count >> 1);
  for (let k: usize = 0; k < pairs; k++) {
    const e = f64x2.promote_low_f32x4(v128.load64_zero(electrons + (k << 3)));
    const b = f64x2.promote_low_f32x4(v128.load64_zero(background + (k << 3)));
    const level = f64x2.add(f64x2.mul(f64x2.splat(scale), b), f64x2.splat(shift));
    const off = f64x2.sub(e, level);
    const variance = f64x2.add(f64x2.pmax(level, f64x2.splat(0)), f64x2.splat(readVariance));
    const near = f64x2.le(f64x2.mul(off, off), f64x2.mul(f64x2.splat(clip), variance));
    light = f64x2.add(light, v128.and(e, near));
    expected = f64x2.add(expected, v128.and(b, near));
    // All bits of a lane that is kept are set: -1 as a number.
    kept = i64x2.sub(kept, near);
  }
  let lightSum = f64x2.extract_lane(light, 0) + f64x2.extract_lane(light, 1);
  let expectedSum = f64x2.extract_lane(expected, 0) + f64x2.extract_lane(expected, 1);
  let keptSum = <f64>(i64x2.extract_lane(kept, 0) + i64x2.extract_lane(kept, 1));
  if (count & 1) {
    const e = <f64>load<f32>(electrons + (pairs << 3));
    const b = <f64>load<f32>(background + (pairs << 3));
    const level = scale * b + shift;
    const off = e - level;
    if (off * off <= clip * (max<f64>(level, 0) + readVariance)) {
      lightSum += e;
      expectedSum += b;
      keptSum += 1;
    }
  }
  store<f64>(sums, lightSum);
  store<f64>(sums, expectedSum, 8);
  store<f64>(sums, keptSum, 16);
}

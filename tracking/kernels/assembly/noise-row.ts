/**
 * A row of the frame in units of its own noise, (electrons - light) / sqrt(light + floor), where light is
 * max(0, scale * background + shift), which becomes `bare` and `model`. Pixels that are not usable are 0,
 * unless they are saturated.
 *
 * All arrays reach to the next multiple of 4 pixels; what stands there is written as well.
 *
 * @param noise f32 per pixel, out
 */
export function noiseRow(
  electrons: usize,
  usable: usize,
  background: usize,
  bare: usize,
  model: usize,
  noise: usize,
  pixels: i32,
  scale: f32,
  shift: f32,
  floor: f32,
  saturation: f32,
): void {
  const zero = f32x4.splat(0);
  for (let i: usize = 0; i < <usize>pixels; i += 4) {
    const at = i << 2;
    const level = f32x4.add(f32x4.mul(v128.load(background + at), f32x4.splat(scale)), f32x4.splat(shift));
    const light = f32x4.pmax(level, zero);
    v128.store(bare + at, light);
    v128.store(model + at, light);
    const e = v128.load(electrons + at);
    const marks = i32x4.extend_low_i16x8_u(i16x8.extend_low_i8x16_u(v128.load32_zero(usable + i)));
    const seen = v128.or(i32x4.ne(marks, zero), f32x4.ge(e, f32x4.splat(saturation)));
    const value = f32x4.div(f32x4.sub(e, light), f32x4.sqrt(f32x4.add(light, f32x4.splat(floor))));
    v128.store(noise + at, v128.and(value, seen));
  }
}

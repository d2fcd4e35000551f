import { electronsAt, FrameFacts, goodAt, lightAt } from './counts';

/**
 * A row of the frame in units of its own noise, (electrons - light) / sqrt(light + floor), where light is the
 * expected light without spots. Pixels that are bad or hold no finite number are 0.
 *
 * All arrays reach to the next multiple of 4 pixels; what stands there is written as well.
 *
 * @param noise f32 per pixel, out
 */
export function noiseRow(
  facts: FrameFacts,
  counts: usize,
  bad: usize,
  background: usize,
  noise: usize,
  pixels: i32,
  floor: f32,
): void {
  const offset = f32x4.splat(facts.offset);
  const perCount = f32x4.splat(facts.perCount);
  const scale = f32x4.splat(facts.scale);
  const shift = f32x4.splat(facts.shift);
  const floors = f32x4.splat(floor);
  for (let i: usize = 0; i < <usize>pixels; i += 4) {
    const at = i << 2;
    const light = lightAt(background + at, scale, shift);
    const e = electronsAt(counts + at, offset, perCount);
    const value = f32x4.div(f32x4.sub(e, light), f32x4.sqrt(f32x4.add(light, floors)));
    v128.store(noise + at, v128.and(value, goodAt(bad + i, e)));
  }
}

/**
 * A row between two others: max(least, top + share * (bottom - top)).
 *
 * @param top f32 @param bottom f32 @param out f32; all reach to the next multiple of 4 pixels
 */
export function mixRows(top: usize, bottom: usize, share: f32, least: f32, out: usize, pixels: i32): void {
  const weight = f32x4.splat(share);
  const floor = f32x4.splat(least);
  for (let i: usize = 0, end = (<usize>pixels) << 2; i < end; i += 16) {
    const above = v128.load(top + i);
    const value = f32x4.add(above, f32x4.mul(f32x4.sub(v128.load(bottom + i), above), weight));
    v128.store(out + i, f32x4.pmax(value, floor));
  }
}

// A frame stays in memory as the counts that the camera gave. Whoever needs photoelectrons converts them on
// the way, which takes less time than writing them down and reading them again.

/** What turns counts into electrons, and the light of the frame; written by `respond`, f32 each. */
@unmanaged
export class FrameFacts {
  offset: f32 = 0;
  perCount: f32 = 0;
  /** Electrons from which a pixel is saturated. */
  saturation: f32 = 0;
  // Expected light without spots is max(0, scale * background + shift).
  scale: f32 = 0;
  shift: f32 = 0;
}

/** Photoelectrons of 4 pixels, whatever the pixels are worth. */
export function electronsAt(counts: usize, offset: v128, perCount: v128): v128 {
  return f32x4.mul(f32x4.sub(v128.load(counts), offset), perCount);
}

/** All bits of a lane are set where a pixel is not bad and holds a finite number. */
export function goodAt(bad: usize, electrons: v128): v128 {
  const marks = i32x4.extend_low_i16x8_u(i16x8.extend_low_i8x16_u(v128.load32_zero(bad)));
  // Infinite or not a number: e - e is not 0.
  const finite = f32x4.eq(f32x4.sub(electrons, electrons), f32x4.splat(0));
  return v128.and(finite, i32x4.eq(marks, i32x4.splat(0)));
}

/** Expected light without spots of 4 pixels. */
export function lightAt(background: usize, scale: v128, shift: v128): v128 {
  const level = f32x4.add(f32x4.mul(v128.load(background), scale), shift);
  return f32x4.pmax(level, f32x4.splat(0));
}

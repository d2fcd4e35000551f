/**
 * Pixels from `level` on that none of their eight neighbours exceeds; of equal neighbours the first in
 * reading order counts.
 *
 * @param response f32 per pixel @param peaks i32, room for a peak in every block of 2 x 2 pixels
 * @returns number of peaks
 */
export function findPeaks(response: usize, width: i32, height: i32, level: f32, peaks: usize): i32 {
  return <i32>((findPeaksOfRows(response, width, height, 0, height, level, peaks) - peaks) >> 2);
}

/**
 * The same in rows `from .. to - 1`; those to either side must be there.
 *
 * @param peaks address of the first peak to be written @returns address behind the last one
 */
export function findPeaksOfRows(
  response: usize,
  width: i32,
  height: i32,
  from: i32,
  to: i32,
  level: f32,
  peaks: usize,
): usize {
  const levels = f32x4.splat(level);
  const stride = (<usize>width) << 2;
  for (let y = from; y < to; y++) {
    const row = response + ((<usize>y * <usize>width) << 2);
    let x = 0;
    for (; x + 16 <= width; x += 16) {
      const at = row + ((<usize>x) << 2);
      const a = f32x4.ge(v128.load(at), levels);
      const b = f32x4.ge(v128.load(at, 16), levels);
      const c = f32x4.ge(v128.load(at, 32), levels);
      const d = f32x4.ge(v128.load(at, 48), levels);
      // Nearly always nothing in 16 pixels is bright enough.
      if (!v128.any_true(v128.or(v128.or(a, b), v128.or(c, d)))) continue;
      const inside = y > 0 && y < height - 1 && x > 0 && x + 16 < width;
      let found = bits(a, at, stride, inside) | (bits(b, at + 16, stride, inside) << 4);
      found |= (bits(c, at + 32, stride, inside) << 8) | (bits(d, at + 48, stride, inside) << 12);
      while (found) {
        const here = x + ctz(found);
        found &= found - 1;
        if (!inside && !isPeak(response, width, height, here, y)) continue;
        store<i32>(peaks, y * width + here);
        peaks += 4;
      }
    }
    for (; x < width; x++) {
      if (!(load<f32>(row + ((<usize>x) << 2)) >= level) || !isPeak(response, width, height, x, y)) continue;
      store<i32>(peaks, y * width + x);
      peaks += 4;
    }
  }
  return peaks;
}

/** Which of 4 pixels are bright and, when they have all their neighbours, peaks. */
function bits(bright: v128, at: usize, stride: usize, inside: bool): i32 {
  if (!inside || !v128.any_true(bright)) return i32x4.bitmask(bright);
  const value = v128.load(at);
  const up = at - stride;
  const down = at + stride;
  const before = v128.and(
    v128.and(f32x4.gt(value, v128.load(at - 4)), f32x4.gt(value, v128.load(up - 4))),
    v128.and(f32x4.gt(value, v128.load(up)), f32x4.gt(value, v128.load(up + 4))),
  );
  const after = v128.and(
    v128.and(f32x4.ge(value, v128.load(at + 4)), f32x4.ge(value, v128.load(down - 4))),
    v128.and(f32x4.ge(value, v128.load(down)), f32x4.ge(value, v128.load(down + 4))),
  );
  return i32x4.bitmask(v128.and(bright, v128.and(before, after)));
}

/** As `bits`, for one bright pixel that may stand at the border. */
function isPeak(response: usize, width: i32, height: i32, x: i32, y: i32): bool {
  const stride = (<usize>width) << 2;
  const at = response + ((<usize>y * <usize>width + <usize>x) << 2);
  const value = load<f32>(at);
  const left = x > 0;
  const right = x < width - 1;
  if (left && load<f32>(at - 4) >= value) return false;
  if (right && load<f32>(at + 4) > value) return false;
  if (y > 0) {
    const up = at - stride;
    if (load<f32>(up) >= value || (left && load<f32>(up - 4) >= value)) return false;
    if (right && load<f32>(up + 4) >= value) return false;
  }
  if (y < height - 1) {
    const down = at + stride;
    if (load<f32>(down) > value || (left && load<f32>(down - 4) > value)) return false;
    if (right && load<f32>(down + 4) > value) return false;
  }
  return true;
}

import { electronsAt, goodAt, lightAt } from './counts';
import { CENTRE_X, CENTRE_Y, settingsOf, Settings } from './joint-fit-layout';

export function roundPx(value: f64): i32 {
  return <i32>floor<f64>(value + 0.5);
}

/**
 * Loads what a joint fit looks at: boxes around the first `count` centres, as far as the image goes and the
 * room reaches. Data and fixed light have the read variance added, which makes them Poisson to good
 * approximation. The spots that are to be fitted must not be painted.
 */
export function loadJointFitWindow(fit: usize, count: i32): void {
  const s = settingsOf(fit);
  const reach = s.reach;
  let left = i32.MAX_VALUE;
  let right = i32.MIN_VALUE;
  let top = i32.MAX_VALUE;
  let bottom = i32.MIN_VALUE;
  for (let i: i32 = 0; i < count; i++) {
    const x = roundPx(load<f64>(fit + CENTRE_X + ((<usize>i) << 3)));
    const y = roundPx(load<f64>(fit + CENTRE_Y + ((<usize>i) << 3)));
    left = min(left, x - reach);
    right = max(right, x + reach);
    top = min(top, y - reach);
    bottom = max(bottom, y + reach);
  }
  s.x0 = max(0, left);
  s.y0 = max(0, top);
  s.width = max(0, min(s.windowMost, min(s.imageWidth - 1, right) - s.x0 + 1));
  s.height = max(0, min(s.windowMost, min(s.imageHeight - 1, bottom) - s.y0 + 1));
  s.stride = (s.width + 3) & ~3;
  if (count > 1) markBoxes(fit, s, count);
  const shift = f32x4.splat(<f32>s.readVariance);
  const facts = s.facts;
  const offset = f32x4.splat(facts.offset);
  const perCount = f32x4.splat(facts.perCount);
  const saturation = f32x4.splat(facts.saturation);
  const scale = f32x4.splat(facts.scale);
  const dim = f32x4.splat(facts.shift);
  const width = i32x4.splat(s.width);
  const all = count === 1;
  for (let y: i32 = 0; y < s.height; y++) {
    const from = <usize>((s.y0 + y) * s.imageWidth + s.x0);
    const row = (<usize>(y * s.stride)) << 2;
    let place = i32x4(0, 1, 2, 3);
    for (let x: usize = 0; x < <usize>s.stride; x += 4) {
      const at = row + (x << 2);
      const e = electronsAt(s.counts + ((from + x) << 2), offset, perCount);
      const good = goodAt(s.bad + from + x, e);
      // What can't be used must be a number all the same: it is multiplied by 0.
      v128.store(s.data + at, f32x4.add(v128.and(e, good), shift));
      const light = lightAt(s.background + ((from + x) << 2), scale, dim);
      const spots = v128.load(s.spotLight + ((from + x) << 2));
      v128.store(s.fixed + at, f32x4.add(f32x4.add(light, spots), shift));
      const usable = v128.and(v128.and(good, f32x4.lt(e, saturation)), i32x4.gt_s(width, place));
      v128.store(s.used + at, all ? usable : v128.and(usable, v128.load(s.used + at)));
      place = i32x4.add(place, i32x4.splat(4));
    }
  }
}

/** All ones in the boxes of all spots, zeros between them. */
function markBoxes(fit: usize, s: Settings, count: i32): void {
  memory.fill(s.used, 0, (<usize>(s.stride * s.height)) << 2);
  for (let i: i32 = 0; i < count; i++) {
    const x = roundPx(load<f64>(fit + CENTRE_X + ((<usize>i) << 3))) - s.x0;
    const y = roundPx(load<f64>(fit + CENTRE_Y + ((<usize>i) << 3))) - s.y0;
    const left = max(0, x - s.reach);
    const right = min(s.width - 1, x + s.reach);
    const bottom = min(s.height - 1, y + s.reach);
    for (let row = max(0, y - s.reach); row <= bottom; row++) {
      memory.fill(
        s.used + ((<usize>(row * s.stride + left)) << 2),
        0xff,
        (<usize>max(0, right - left + 1)) << 2,
      );
    }
  }
}

import { BOX_X, BOX_Y, N, SIGMA, X, Y, settingsOf, shareAt } from './joint-fit-layout';
import { logOf } from './joint-fit-log';
import { shareLight } from './joint-fit-shares';
import { laneSum } from './joint-fit-sums';

/** Expected light is never taken for less, electrons. */
export const EXPECTED_LEAST: f32 = 0.05;

/** Shares of light of all spots in their boxes; zero behind the box and where it leaves the window. */
export function shareJointFit(fit: usize, count: i32): void {
  const s = settingsOf(fit);
  const room = s.shareRoom;
  for (let i: i32 = 0; i < count; i++) {
    const at = (<usize>i) << 3;
    const boxX = load<i32>(fit + BOX_X + ((<usize>i) << 2));
    const boxY = load<i32>(fit + BOX_Y + ((<usize>i) << 2));
    const x = <f32>(load<f64>(fit + X + at) - <f64>(boxX + s.x0));
    const y = <f32>(load<f64>(fit + Y + at) - <f64>(boxY + s.y0));
    const along = shareAt(fit, room, i, 0);
    const next = (<usize>room) << 2;
    const sigma = <f32>load<f64>(fit + SIGMA + at);
    shareLight(x, sigma, s.side, -boxX, min(s.side, s.width - boxX), along, along + next, along + 2 * next);
    const down = along + 3 * next;
    shareLight(y, sigma, s.side, -boxY, min(s.side, s.height - boxY), down, down + next, down + 2 * next);
  }
}

/**
 * Expected light of the window at the present values into `weight`, less `offset`'s share where it isn't
 * wanted. Shares must be those of the present values.
 */
export function paintExpected(fit: usize, count: i32, offset: f32): void {
  const s = settingsOf(fit);
  const bytes = (<usize>(s.stride * s.height)) << 2;
  const offsets = f32x4.splat(offset);
  for (let at: usize = 0; at < bytes; at += 16) {
    v128.store(s.weight + at, f32x4.add(v128.load(s.fixed + at), offsets));
  }
  const room = s.shareRoom;
  const vectors = ((<usize>(s.side + 3)) >> 2) << 4;
  for (let i: i32 = 0; i < count; i++) {
    const boxX = load<i32>(fit + BOX_X + ((<usize>i) << 2));
    const boxY = load<i32>(fit + BOX_Y + ((<usize>i) << 2));
    const n = <f32>load<f64>(fit + N + ((<usize>i) << 3));
    const along = shareAt(fit, room, i, 0);
    const down = shareAt(fit, room, i, 3);
    const to = min(s.side, s.height - boxY);
    for (let j = max(0, -boxY); j < to; j++) {
      const light = f32x4.splat(n * load<f32>(down + ((<usize>j) << 2)));
      const row = s.weight + (((boxY + j) * s.stride + boxX) << 2);
      for (let at: usize = 0; at < vectors; at += 16) {
        v128.store(row + at, f32x4.add(v128.load(row + at), f32x4.mul(light, v128.load(along + at))));
      }
    }
  }
}

/** Turns expected light into weights 1 / expected and scores data / expected - 1; 0 where not used. */
export function weighExpected(fit: usize): void {
  const s = settingsOf(fit);
  const bytes = (<usize>(s.stride * s.height)) << 2;
  for (let at: usize = 0; at < bytes; at += 16) {
    const used = v128.load(s.used + at);
    const expected = f32x4.pmax(f32x4.splat(EXPECTED_LEAST), v128.load(s.weight + at));
    const w = v128.and(f32x4.div(f32x4.splat(1), expected), used);
    v128.store(s.weight + at, w);
    const excess = f32x4.sub(v128.load(s.data + at), expected);
    v128.store(s.score + at, f32x4.mul(excess, w));
  }
}

/**
 * Log-likelihood of expected light in `weight`, up to a constant that depends on the data alone: each
 * pixel's is taken relative to that of its own datum, or sums in single precision would lose it.
 */
export function likelihoodOfExpected(fit: usize): f64 {
  const s = settingsOf(fit);
  let total: f64 = 0;
  const least = f32x4.splat(EXPECTED_LEAST);
  for (let y: i32 = 0; y < s.height; y++) {
    let sum = f32x4.splat(0);
    const row = (<usize>(y * s.stride)) << 2;
    const end = row + ((<usize>s.stride) << 2);
    for (let at = row; at < end; at += 16) {
      const data = v128.load(s.data + at);
      const expected = f32x4.pmax(least, v128.load(s.weight + at));
      const reference = f32x4.pmax(least, data);
      const gain = f32x4.mul(data, logOf(f32x4.div(expected, reference)));
      const value = f32x4.sub(gain, f32x4.sub(expected, reference));
      sum = f32x4.add(sum, v128.and(value, v128.load(s.used + at)));
    }
    total += laneSum(sum);
  }
  return total - 0.5 * (s.offset / s.offsetSpread) ** 2;
}

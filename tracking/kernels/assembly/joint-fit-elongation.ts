import { BOX_X, BOX_Y, ELONGATION, N, SPLIT_X, SPLIT_Y, settingsOf, shareAt } from './joint-fit-layout';
import { laneSums } from './joint-fit-sums';

/**
 * Score test of whether each spot of the fit made last is wider one way than the other, and half of the
 * vector between the two spots that would explain it best: see `tracking/detection/elongation.ts`.
 */
export function elongateJointFit(fit: usize): void {
  const s = settingsOf(fit);
  const next = (<usize>s.shareRoom) << 2;
  const vectors = ((<usize>(s.side + 3)) >> 2) << 4;
  const rowBytes = (<usize>s.stride) << 2;
  for (let i: i32 = 0; i < s.count; i++) {
    const boxX = load<i32>(fit + BOX_X + ((<usize>i) << 2));
    const boxY = load<i32>(fit + BOX_Y + ((<usize>i) << 2));
    const along = shareAt(fit, s.shareRoom, i, 0);
    const down = along + 3 * next;
    const from = max(0, -boxY);
    const to = min(s.side, s.height - boxY);
    let scoreE = f32x4.splat(0);
    let scoreX = f32x4.splat(0);
    let infoE = f32x4.splat(0);
    let infoX = f32x4.splat(0);
    for (let at: usize = 0; at < vectors; at += 16) {
      const p = v128.load(along + at);
      const d = v128.load(along + next + at);
      const dd = v128.load(along + 2 * next + at);
      let pixel = <usize>(((boxY + from) * s.stride + boxX) << 2) + at;
      for (let j = from; j < to; j++) {
        const row = down + ((<usize>j) << 2);
        const longer = f32x4.sub(
          f32x4.mul(dd, v128.load32_splat(row)),
          f32x4.mul(p, v128.load32_splat(row + 2 * next)),
        );
        const slanted = f32x4.mul(d, v128.load32_splat(row + next));
        const r = v128.load(s.score + pixel);
        const w = v128.load(s.weight + pixel);
        scoreE = f32x4.add(scoreE, f32x4.mul(r, longer));
        scoreX = f32x4.add(scoreX, f32x4.mul(r, slanted));
        infoE = f32x4.add(infoE, f32x4.mul(w, f32x4.mul(longer, longer)));
        infoX = f32x4.add(infoX, f32x4.mul(w, f32x4.mul(slanted, slanted)));
        pixel += rowBytes;
      }
    }
    const sums = laneSums(scoreE, scoreX, infoE, infoX);
    storeSplit(
      fit,
      i,
      <f64>f32x4.extract_lane(sums, 0),
      <f64>f32x4.extract_lane(sums, 1),
      <f64>f32x4.extract_lane(sums, 2),
      <f64>f32x4.extract_lane(sums, 3),
    );
  }
}

function storeSplit(fit: usize, i: i32, scoreE: f64, scoreX: f64, infoE: f64, infoX: f64): void {
  const at = (<usize>i) << 3;
  const good = infoE > 0 && infoX > 0;
  store<f64>(fit + ELONGATION + at, good ? (scoreE * scoreE) / infoE + (scoreX * scoreX) / infoX : 0);
  // Half the light at +-d adds n/4 d^2 (cos 2a (Pxx - Pyy) + 2 sin 2a Pxy).
  const cosine = good ? (4 * scoreE) / infoE : 0;
  const sine = good ? (2 * scoreX) / infoX : 0;
  const both = sqrt<f64>(cosine * cosine + sine * sine);
  const half = sqrt<f64>(both / load<f64>(fit + N + at));
  const ratio = both > 0 ? cosine / both : 1;
  // Half of the angle whose cosine and sine are known.
  store<f64>(fit + SPLIT_X + at, half * sqrt<f64>(max(0, 0.5 * (1 + ratio))));
  store<f64>(fit + SPLIT_Y + at, copysign<f64>(half * sqrt<f64>(max(0, 0.5 * (1 - ratio))), sine));
}

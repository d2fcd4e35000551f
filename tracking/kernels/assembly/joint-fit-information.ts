import {
  BOX_X,
  BOX_Y,
  GRADIENT,
  INFORMATION,
  N,
  PARAMETERS_MOST,
  settingsOf,
  shareAt,
  Settings,
} from './joint-fit-layout';
import { laneSums } from './joint-fit-sums';

function setInformation(fit: usize, row: i32, column: i32, value: f64): void {
  store<f64>(fit + INFORMATION + ((<usize>(row * PARAMETERS_MOST + column)) << 3), value);
}

/** Gradient and Fisher information (lower triangle) of offset and spots, from weights, scores and shares. */
export function informJointFit(fit: usize, count: i32): void {
  const s = settingsOf(fit);
  const bytes = (<usize>(s.stride * s.height)) << 2;
  let w = f32x4.splat(0);
  let g = f32x4.splat(0);
  for (let at: usize = 0; at < bytes; at += 16) {
    w = f32x4.add(w, v128.load(s.weight + at));
    g = f32x4.add(g, v128.load(s.score + at));
  }
  const sums = laneSums(w, g, w, g);
  const precision = 1 / (s.offsetSpread * s.offsetSpread);
  setInformation(fit, 0, 0, precision + <f64>f32x4.extract_lane(sums, 0));
  store<f64>(fit + GRADIENT, <f64>f32x4.extract_lane(sums, 1) - s.offset * precision);
  for (let i: i32 = 0; i < count; i++) {
    informSpot(fit, s, i);
    for (let k: i32 = 0; k < i; k++) informPair(fit, s, i, k);
  }
}

/** Entries of one spot with itself and with the offset. Columns go outside, so that rows add up in vectors. */
function informSpot(fit: usize, s: Settings, i: i32): void {
  const boxX = load<i32>(fit + BOX_X + ((<usize>i) << 2));
  const boxY = load<i32>(fit + BOX_Y + ((<usize>i) << 2));
  const along = shareAt(fit, s.shareRoom, i, 0);
  const next = (<usize>s.shareRoom) << 2;
  const down = along + 3 * next;
  const from = max(0, -boxY);
  const to = min(s.side, s.height - boxY);
  const vectors = ((<usize>(s.side + 3)) >> 2) << 4;
  const rowBytes = (<usize>s.stride) << 2;
  const zero = f32x4.splat(0);
  let xx = zero;
  let xy = zero;
  let xn = zero;
  let yy = zero;
  let yn = zero;
  let nn = zero;
  let bx = zero;
  let by = zero;
  let bn = zero;
  let gx = zero;
  let gy = zero;
  let gn = zero;
  for (let at: usize = 0; at < vectors; at += 16) {
    let pp = zero;
    let pd = zero;
    let dd = zero;
    let p1 = zero;
    let d1 = zero;
    let sp = zero;
    let sd = zero;
    let pixel = <usize>(((boxY + from) * s.stride + boxX) << 2) + at;
    for (let j = from; j < to; j++) {
      const p = v128.load32_splat(down + ((<usize>j) << 2));
      const d = v128.load32_splat(down + next + ((<usize>j) << 2));
      const w = v128.load(s.weight + pixel);
      const r = v128.load(s.score + pixel);
      const wp = f32x4.mul(w, p);
      const wd = f32x4.mul(w, d);
      p1 = f32x4.add(p1, wp);
      d1 = f32x4.add(d1, wd);
      pp = f32x4.add(pp, f32x4.mul(wp, p));
      pd = f32x4.add(pd, f32x4.mul(wp, d));
      dd = f32x4.add(dd, f32x4.mul(wd, d));
      sp = f32x4.add(sp, f32x4.mul(r, p));
      sd = f32x4.add(sd, f32x4.mul(r, d));
      pixel += rowBytes;
    }
    const p = v128.load(along + at);
    const d = v128.load(along + next + at);
    const dp = f32x4.mul(d, p);
    const p2 = f32x4.mul(p, p);
    xx = f32x4.add(xx, f32x4.mul(pp, f32x4.mul(d, d)));
    xy = f32x4.add(xy, f32x4.mul(pd, dp));
    xn = f32x4.add(xn, f32x4.mul(pp, dp));
    yy = f32x4.add(yy, f32x4.mul(dd, p2));
    yn = f32x4.add(yn, f32x4.mul(pd, p2));
    nn = f32x4.add(nn, f32x4.mul(pp, p2));
    bx = f32x4.add(bx, f32x4.mul(p1, d));
    by = f32x4.add(by, f32x4.mul(d1, p));
    bn = f32x4.add(bn, f32x4.mul(p1, p));
    gx = f32x4.add(gx, f32x4.mul(sp, d));
    gy = f32x4.add(gy, f32x4.mul(sd, p));
    gn = f32x4.add(gn, f32x4.mul(sp, p));
  }
  const n = load<f64>(fit + N + ((<usize>i) << 3));
  const x = 3 * i + 1;
  const place = laneSums(xx, xy, yy, nn);
  const mixed = laneSums(xn, yn, bx, by);
  const slopes = laneSums(gx, gy, gn, bn);
  setInformation(fit, x, 0, n * <f64>f32x4.extract_lane(mixed, 2));
  setInformation(fit, x + 1, 0, n * <f64>f32x4.extract_lane(mixed, 3));
  setInformation(fit, x + 2, 0, <f64>f32x4.extract_lane(slopes, 3));
  setInformation(fit, x, x, n * n * <f64>f32x4.extract_lane(place, 0));
  setInformation(fit, x + 1, x, n * n * <f64>f32x4.extract_lane(place, 1));
  setInformation(fit, x + 1, x + 1, n * n * <f64>f32x4.extract_lane(place, 2));
  setInformation(fit, x + 2, x, n * <f64>f32x4.extract_lane(mixed, 0));
  setInformation(fit, x + 2, x + 1, n * <f64>f32x4.extract_lane(mixed, 1));
  setInformation(fit, x + 2, x + 2, <f64>f32x4.extract_lane(place, 3));
  store<f64>(fit + GRADIENT + ((<usize>x) << 3), n * <f64>f32x4.extract_lane(slopes, 0));
  store<f64>(fit + GRADIENT + ((<usize>(x + 1)) << 3), n * <f64>f32x4.extract_lane(slopes, 1));
  store<f64>(fit + GRADIENT + ((<usize>(x + 2)) << 3), <f64>f32x4.extract_lane(slopes, 2));
}

/** Entries of spots i > k where their boxes overlap; nothing but zeros where they don't. */
function informPair(fit: usize, s: Settings, i: i32, k: i32): void {
  const iX = load<i32>(fit + BOX_X + ((<usize>i) << 2));
  const iY = load<i32>(fit + BOX_Y + ((<usize>i) << 2));
  const kX = load<i32>(fit + BOX_X + ((<usize>k) << 2));
  const kY = load<i32>(fit + BOX_Y + ((<usize>k) << 2));
  const left = max(iX, kX);
  const right = min(iX, kX) + s.side;
  const top = max(max(iY, kY), 0);
  const bottom = min(min(iY, kY) + s.side, s.height);
  const next = (<usize>s.shareRoom) << 2;
  // Shares end in zeros, so that vectors may reach beyond the right border.
  const iAlong = shareAt(fit, s.shareRoom, i, 0) + ((<usize>(left - iX)) << 2);
  const kAlong = shareAt(fit, s.shareRoom, k, 0) + ((<usize>(left - kX)) << 2);
  const iDown = shareAt(fit, s.shareRoom, i, 3) - ((<usize>iY) << 2);
  const kDown = shareAt(fit, s.shareRoom, k, 3) - ((<usize>kY) << 2);
  const rowBytes = (<usize>s.stride) << 2;
  const vectors = right > left && bottom > top ? ((<usize>(right - left + 3)) >> 2) << 4 : 0;
  const zero = f32x4.splat(0);
  let xx = zero;
  let xy = zero;
  let xn = zero;
  let yx = zero;
  let yy = zero;
  let yn = zero;
  let nx = zero;
  let ny = zero;
  let nn = zero;
  for (let at: usize = 0; at < vectors; at += 16) {
    let pp = zero;
    let pd = zero;
    let dp = zero;
    let dd = zero;
    let pixel = s.weight + <usize>((top * s.stride + left) << 2) + at;
    for (let y = top; y < bottom; y++) {
      const w = v128.load(pixel);
      const wp = f32x4.mul(w, v128.load32_splat(iDown + ((<usize>y) << 2)));
      const wd = f32x4.mul(w, v128.load32_splat(iDown + next + ((<usize>y) << 2)));
      const p = v128.load32_splat(kDown + ((<usize>y) << 2));
      const d = v128.load32_splat(kDown + next + ((<usize>y) << 2));
      pp = f32x4.add(pp, f32x4.mul(wp, p));
      pd = f32x4.add(pd, f32x4.mul(wp, d));
      dp = f32x4.add(dp, f32x4.mul(wd, p));
      dd = f32x4.add(dd, f32x4.mul(wd, d));
      pixel += rowBytes;
    }
    const iP = v128.load(iAlong + at);
    const iD = v128.load(iAlong + next + at);
    const kP = v128.load(kAlong + at);
    const kD = v128.load(kAlong + next + at);
    const bothP = f32x4.mul(iP, kP);
    const iSlope = f32x4.mul(iD, kP);
    const kSlope = f32x4.mul(iP, kD);
    xx = f32x4.add(xx, f32x4.mul(pp, f32x4.mul(iD, kD)));
    xy = f32x4.add(xy, f32x4.mul(pd, iSlope));
    xn = f32x4.add(xn, f32x4.mul(pp, iSlope));
    yx = f32x4.add(yx, f32x4.mul(dp, kSlope));
    yy = f32x4.add(yy, f32x4.mul(dd, bothP));
    yn = f32x4.add(yn, f32x4.mul(dp, bothP));
    nx = f32x4.add(nx, f32x4.mul(pp, kSlope));
    ny = f32x4.add(ny, f32x4.mul(pd, bothP));
    nn = f32x4.add(nn, f32x4.mul(pp, bothP));
  }
  const nI = load<f64>(fit + N + ((<usize>i) << 3));
  const nK = load<f64>(fit + N + ((<usize>k) << 3));
  const row = 3 * i + 1;
  const column = 3 * k + 1;
  const places = laneSums(xx, xy, yx, yy);
  const mixed = laneSums(xn, yn, nx, ny);
  const both = laneSums(nn, nn, nn, nn);
  setInformation(fit, row, column, nI * nK * <f64>f32x4.extract_lane(places, 0));
  setInformation(fit, row, column + 1, nI * nK * <f64>f32x4.extract_lane(places, 1));
  setInformation(fit, row, column + 2, nI * <f64>f32x4.extract_lane(mixed, 0));
  setInformation(fit, row + 1, column, nI * nK * <f64>f32x4.extract_lane(places, 2));
  setInformation(fit, row + 1, column + 1, nI * nK * <f64>f32x4.extract_lane(places, 3));
  setInformation(fit, row + 1, column + 2, nI * <f64>f32x4.extract_lane(mixed, 1));
  setInformation(fit, row + 2, column, nK * <f64>f32x4.extract_lane(mixed, 2));
  setInformation(fit, row + 2, column + 1, nK * <f64>f32x4.extract_lane(mixed, 3));
  setInformation(fit, row + 2, column + 2, <f64>f32x4.extract_lane(both, 0));
}

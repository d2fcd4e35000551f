import { lightAt } from './counts';
import { PEAK, settingsOf, Settings } from './joint-fit-layout';
import { placeBoxes } from './joint-fit';
import { paintExpected, shareJointFit } from './joint-fit-expectation';

// The same as in `tracking/detection/second-look.ts`, which says why.
const SHAPE_ERROR: f32 = 0.08;
const DARK_VARIANCE: f32 = 1e-3;

/**
 * Looks for the strongest peak of what is left in the window after the spots of the fit made last: residual in
 * units of its noise, correlated with the spot, not on the window's border. Leaves response, x, y and
 * brightness at PEAK; the response is -Infinity where there is no pixel to look at.
 *
 * @param squares sum of squares of the spot's shape along one axis
 */
export function peakOfResidual(fit: usize, squares: f64): void {
  const s = settingsOf(fit);
  // As the spots are painted: in boxes around where they are now.
  if (placeBoxes(fit, s, s.count)) shareJointFit(fit, s.count);
  paintExpected(fit, s.count, 0);
  writeNoise(s);
  correlateRows(s);
  const last = s.taps + ((<usize>s.tapReach) << 2);
  let best: f32 = -Infinity;
  let bestX: i32 = 0;
  let bestY: i32 = 0;
  const rowBytes = (<usize>s.stride) << 2;
  for (let y: i32 = 1; y < s.height - 1; y++) {
    for (let x: i32 = 0; x < s.width; x += 4) {
      const at = <usize>y * rowBytes + ((<usize>x) << 2);
      const middle = rowsOf(s) + at;
      let sum = f32x4.mul(v128.load32_splat(s.taps), v128.load(middle));
      let far: usize = 0;
      for (let tap = s.taps + 4; tap <= last; tap += 4) {
        far += rowBytes;
        const both = f32x4.add(v128.load(middle - far), v128.load(middle + far));
        sum = f32x4.add(sum, f32x4.mul(v128.load32_splat(tap), both));
      }
      const stronger = v128.and(f32x4.gt(sum, f32x4.splat(best)), v128.load(s.used + at));
      if (!v128.any_true(stronger)) continue;
      for (let i: i32 = 0; i < 4; i++) {
        if (x + i < 1 || x + i >= s.width - 1 || load<i32>(s.used + at + ((<usize>i) << 2)) === 0) continue;
        const value = laneOf(sum, i);
        if (!(value > best)) continue;
        best = value;
        bestX = x + i;
        bestY = y;
      }
    }
  }
  const found = best > 0;
  const light = load<f32>(s.weight + <usize>bestY * rowBytes + ((<usize>bestX) << 2));
  store<f64>(fit + PEAK, <f64>best);
  store<f64>(fit + PEAK + 8, <f64>(s.x0 + bestX));
  store<f64>(fit + PEAK + 16, <f64>(s.y0 + bestY));
  store<f64>(fit + PEAK + 24, found ? (<f64>best * sqrt<f64>(max<f64>(0, <f64>light))) / squares : 0);
}

function laneOf(vector: v128, place: i32): f32 {
  if (place === 0) return f32x4.extract_lane(vector, 0);
  if (place === 1) return f32x4.extract_lane(vector, 1);
  if (place === 2) return f32x4.extract_lane(vector, 2);
  return f32x4.extract_lane(vector, 3);
}

/** Residuals in units of their noise into `noise`, whose rows have room for the taps at both ends. */
function writeNoise(s: Settings): void {
  const margin = (<usize>s.tapReach) << 2;
  const length = noiseStride(s);
  const shift = f32x4.splat(<f32>s.readVariance);
  const scale = f32x4.splat(s.facts.scale);
  const dim = f32x4.splat(s.facts.shift);
  for (let y: i32 = 0; y < s.height; y++) {
    const row = (<usize>(y * s.stride)) << 2;
    const out = s.noise + ((<usize>(y * length)) << 2);
    const from = (<usize>((s.y0 + y) * s.imageWidth + s.x0)) << 2;
    for (let x: i32 = 0; x < length; x += 4) v128.store(out + ((<usize>x) << 2), f32x4.splat(0));
    for (let x: i32 = 0; x < s.stride; x += 4) {
      const at = (<usize>x) << 2;
      const expected = v128.load(s.weight + row + at);
      const spots = f32x4.sub(f32x4.sub(expected, shift), lightAt(s.background + from + at, scale, dim));
      const doubt = f32x4.mul(spots, f32x4.splat(SHAPE_ERROR));
      const variance = f32x4.pmax(f32x4.splat(DARK_VARIANCE), f32x4.add(expected, f32x4.mul(doubt, doubt)));
      const excess = f32x4.sub(v128.load(s.data + row + at), expected);
      const value = v128.and(f32x4.div(excess, f32x4.sqrt(variance)), v128.load(s.used + row + at));
      v128.store(out + margin + at, value);
    }
  }
}

/** Numbers from row to row of `noise`. */
function noiseStride(s: Settings): i32 {
  return (s.stride + 2 * s.tapReach + 3) & ~3;
}

/** First of the rows correlated along x, `stride` numbers each, with rows of zeros above and below. */
function rowsOf(s: Settings): usize {
  return s.noise + ((<usize>(s.height * noiseStride(s) + s.tapReach * s.stride)) << 2);
}

/** Correlates `noise` along x. */
function correlateRows(s: Settings): void {
  const length = noiseStride(s);
  const last = s.taps + ((<usize>s.tapReach) << 2);
  const marginBytes = (<usize>(s.tapReach * s.stride)) << 2;
  const end = (<usize>(s.height * s.stride)) << 2;
  const rows = rowsOf(s);
  for (let at: usize = 0; at < marginBytes; at += 16) {
    v128.store(rows + at - marginBytes, f32x4.splat(0));
    v128.store(rows + at + end, f32x4.splat(0));
  }
  let out = rows;
  for (let y: i32 = 0; y < s.height; y++) {
    const row = s.noise + ((<usize>(y * length + s.tapReach)) << 2);
    const rowEnd = row + ((<usize>s.stride) << 2);
    for (let at = row; at < rowEnd; at += 16) {
      let sum = f32x4.mul(v128.load32_splat(s.taps), v128.load(at));
      let far: usize = 0;
      for (let tap = s.taps + 4; tap <= last; tap += 4) {
        far += 4;
        const both = f32x4.add(v128.load(at - far), v128.load(at + far));
        sum = f32x4.add(sum, f32x4.mul(v128.load32_splat(tap), both));
      }
      v128.store(out, sum);
      out += 16;
    }
  }
}

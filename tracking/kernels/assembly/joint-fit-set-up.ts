import { FrameFacts } from './counts';
import { SPOTS_MOST, settingsOf, shareAt } from './joint-fit-layout';

/**
 * Tells the joint fits whose memory starts at `fit` (zeros so far) which image they work on.
 *
 * @param facts address of `FrameFacts` @param counts, bad, background, spotLight addresses of the planes
 * @param painted u8 per run of 64 pixels of a row, see `joint-fit-paint.ts`
 * @param reach boxes have 2 reach + 1 columns and rows @param windowMost columns and rows that a window has at most, a multiple of 4
 * @param tapReach the residual filter has taps at distance 0 .. tapReach
 * @returns address of the taps, f32, for the caller to fill.
 */
export function setUpJointFit(
  fit: usize,
  facts: usize,
  counts: usize,
  bad: usize,
  background: usize,
  spotLight: usize,
  painted: usize,
  imageWidth: i32,
  imageHeight: i32,
  reach: i32,
  windowMost: i32,
  tapReach: i32,
  sigma: f64,
  readVariance: f64,
  stepDone: f64,
): usize {
  const s = settingsOf(fit);
  s.facts = changetype<FrameFacts>(facts);
  s.counts = counts;
  s.bad = bad;
  s.background = background;
  s.spotLight = spotLight;
  s.painted = painted;
  s.imageWidth = imageWidth;
  s.imageHeight = imageHeight;
  s.reach = reach;
  s.side = 2 * reach + 1;
  s.shareRoom = ((s.side + 3) & ~3) + 4;
  s.windowMost = windowMost;
  s.tapReach = tapReach;
  s.sigma = sigma;
  s.readVariance = readVariance;
  s.stepDone = stepDone;
  // Fitted spots, and one more that is painted.
  s.taps = shareAt(fit, s.shareRoom, SPOTS_MOST + 1, 0);
  // Boxes may stand beside the window: what is read there must belong to nobody else.
  const guard = (<usize>(s.side + 16)) << 2;
  const room = ((<usize>(windowMost * windowMost)) << 2) + 2 * guard;
  let at = s.taps + (((<usize>(tapReach + 4)) >> 2) << 4) + guard;
  s.data = at;
  s.fixed = at += room;
  s.used = at += room;
  s.weight = at += room;
  s.score = at += room;
  s.noise = at + room;
  return s.taps;
}

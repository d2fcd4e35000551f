import {
  BOX_X,
  BOX_Y,
  FACTOR,
  GRADIENT,
  INFORMATION,
  KEPT,
  N,
  PARAMETERS_MOST,
  STEP,
  SX,
  SY,
  SN,
  SPOTS_MOST,
  VARIANCE,
  X,
  Y,
  settingsOf,
  Settings,
} from './joint-fit-layout';
import { likelihoodOfExpected, paintExpected, shareJointFit, weighExpected } from './joint-fit-expectation';
import { informJointFit } from './joint-fit-information';
import { choleskyFactor, choleskyInverseDiagonal, choleskySolve } from './joint-fit-linear';
import { roundPx } from './joint-fit-window';

// The same as in `tracking/detection/joint-fit.ts`, which says why.
const ITERATIONS_MOST: i32 = 25;
const STEP_DONE_BRIGHTNESS_PER_PX: f64 = 0.5;
const STEP_DONE_TOGETHER: f64 = 0.25;
const STEP_MOST_SIGMAS: f64 = 0.6;
const BRIGHTNESS_KEPT: f64 = 0.25;
const BRIGHTNESS_LEAST: f64 = 1;
const LIKELIHOOD_NOISE: f64 = 1e-3;

/**
 * Maximum-likelihood fit of `count` pixel-integrated Gaussian spots and an offset of the background that is
 * 0 +- `offsetSpread`, in the window loaded last: Fisher scoring, damped where there are neighbours. Starts
 * from x, y, n at `fit` and leaves the result and its standard errors there.
 *
 * @returns 1 when it converged, 0 when not.
 */
export function runJointFit(fit: usize, count: i32, offsetSpread: f64): i32 {
  const s = settingsOf(fit);
  s.count = count;
  s.offset = 0;
  s.offsetSpread = offsetSpread;
  placeBoxes(fit, s, count);
  const size = 3 * count + 1;
  const careful = count > 1;
  let damping: f64 = careful ? 0.01 : 0;
  let objective = expectJointFit(fit, s, careful);
  informJointFit(fit, count);
  let converged: i32 = 0;
  for (let iteration: i32 = 0; iteration < ITERATIONS_MOST; iteration++) {
    if (!solveStep(fit, size, damping)) {
      damping = max(0.01, 10 * damping);
      continue;
    }
    if (careful) copyValues(fit, s, true);
    const done = takeStep(fit, s, count);
    const next = expectJointFit(fit, s, careful);
    if (careful && !(next >= objective - LIKELIHOOD_NOISE)) {
      copyValues(fit, s, false);
      damping = max(0.01, 8 * damping);
      if (damping > 1e6) break;
      continue;
    }
    damping /= 6;
    objective = next;
    informJointFit(fit, count);
    if (done) {
      converged = 1;
      break;
    }
  }
  if (careful && converged === 0) {
    expectJointFit(fit, s, false);
    informJointFit(fit, count);
  }
  standardErrors(fit, count, size);
  return converged;
}

/**
 * Log-likelihood of the fit made last, up to a constant that depends on the window's data alone. Its shares
 * are still those of its values; the weights are spoilt.
 */
export function jointFitLikelihood(fit: usize): f64 {
  const s = settingsOf(fit);
  paintExpected(fit, s.count, <f32>s.offset);
  return likelihoodOfExpected(fit);
}

function expectJointFit(fit: usize, s: Settings, wanted: bool): f64 {
  shareJointFit(fit, s.count);
  paintExpected(fit, s.count, <f32>s.offset);
  const likelihood = wanted ? likelihoodOfExpected(fit) : 0;
  weighExpected(fit);
  return likelihood;
}

/**
 * First column and row of each spot's box in the window; a box that misses the window stands beside it.
 *
 * @returns whether any box has moved.
 */
export function placeBoxes(fit: usize, s: Settings, count: i32): bool {
  let moved = false;
  for (let i: i32 = 0; i < count; i++) {
    const at = (<usize>i) << 3;
    const x = roundPx(load<f64>(fit + X + at)) - s.reach - s.x0;
    const y = roundPx(load<f64>(fit + Y + at)) - s.reach - s.y0;
    const boxX = fit + BOX_X + ((<usize>i) << 2);
    const boxY = fit + BOX_Y + ((<usize>i) << 2);
    const left = max(-s.side, min(s.width, x));
    const top = max(-s.side, min(s.height, y));
    moved = moved || load<i32>(boxX) !== left || load<i32>(boxY) !== top;
    store<i32>(boxX, left);
    store<i32>(boxY, top);
    store<f64>(fit + N + at, max(BRIGHTNESS_LEAST, load<f64>(fit + N + at)));
  }
  return moved;
}

function solveStep(fit: usize, size: i32, damping: f64): bool {
  for (let i: i32 = 0; i < size; i++) {
    const row = (<usize>(i * PARAMETERS_MOST)) << 3;
    for (let k: i32 = 0; k <= i; k++) {
      const at = row + ((<usize>k) << 3);
      store<f64>(fit + FACTOR + at, load<f64>(fit + INFORMATION + at));
    }
    const diagonal = fit + FACTOR + row + ((<usize>i) << 3);
    store<f64>(diagonal, load<f64>(diagonal) * (1 + damping));
    store<f64>(fit + STEP + ((<usize>i) << 3), load<f64>(fit + GRADIENT + ((<usize>i) << 3)));
  }
  if (!choleskyFactor(fit + FACTOR, size)) return false;
  choleskySolve(fit + FACTOR, size, fit + STEP);
  return true;
}

/** Puts the values aside, or back. */
function copyValues(fit: usize, s: Settings, aside: bool): void {
  const bytes: usize = 3 * ((<usize>SPOTS_MOST) << 3);
  if (aside) {
    memory.copy(fit + KEPT, fit + X, bytes);
    store<f64>(fit + KEPT + bytes, s.offset);
  } else {
    memory.copy(fit + X, fit + KEPT, bytes);
    s.offset = load<f64>(fit + KEPT + bytes);
  }
}

/** Applies the step, shortened where it would leap; true when nothing moved to speak of. */
function takeStep(fit: usize, s: Settings, count: i32): bool {
  const most = STEP_MOST_SIGMAS * s.sigma;
  const small = count > 1 ? STEP_DONE_TOGETHER * s.stepDone : s.stepDone;
  let done = true;
  s.offset += load<f64>(fit + STEP);
  for (let i: i32 = 0; i < count; i++) {
    const at = (<usize>i) << 3;
    const step = fit + STEP + 3 * at;
    const dx = max(-most, min(most, load<f64>(step + 8)));
    const dy = max(-most, min(most, load<f64>(step + 16)));
    const before = load<f64>(fit + N + at);
    const n = max(max(BRIGHTNESS_LEAST, BRIGHTNESS_KEPT * before), before + load<f64>(step + 24));
    if (!(abs(dx) <= small && abs(dy) <= small)) done = false;
    if (!(abs(n - before) <= STEP_DONE_BRIGHTNESS_PER_PX * small * n)) done = false;
    const left = <f64>(load<i32>(fit + BOX_X + ((<usize>i) << 2)) + s.x0);
    const top = <f64>(load<i32>(fit + BOX_Y + ((<usize>i) << 2)) + s.y0);
    const last = <f64>(s.side - 1);
    store<f64>(fit + X + at, max(left, min(left + last, load<f64>(fit + X + at) + dx)));
    store<f64>(fit + Y + at, max(top, min(top + last, load<f64>(fit + Y + at) + dy)));
    store<f64>(fit + N + at, n);
  }
  return done;
}

function standardErrors(fit: usize, count: i32, size: i32): void {
  const good = solveStep(fit, size, 0);
  if (good) choleskyInverseDiagonal(fit + FACTOR, size, fit + STEP, fit + VARIANCE);
  for (let i: i32 = 0; i < count; i++) {
    const at = (<usize>i) << 3;
    const variance = fit + VARIANCE + 3 * at;
    store<f64>(fit + SX + at, good ? sqrt<f64>(load<f64>(variance + 8)) : Infinity);
    store<f64>(fit + SY + at, good ? sqrt<f64>(load<f64>(variance + 16)) : Infinity);
    store<f64>(fit + SN + at, good ? sqrt<f64>(load<f64>(variance + 24)) : Infinity);
  }
}

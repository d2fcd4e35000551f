import { pixelShares } from '../pixel-gaussian';
import type { FitWindow } from './fit-window';
import type { FitWork } from './fit-work';

/** Expected light is never taken for less, electrons. */
const EXPECTED_LEAST = 0.05;

/** Shapes, expected light, weights and scores at the present values; the log-likelihood if wanted. */
export function expectLight(work: FitWork, window: FitWindow, wanted: boolean): number {
  const { side, sigma, weight, score } = work;
  const { data, fixed, used } = window;
  const pixels = window.width * window.height;
  for (let k = 0; k < pixels; k++) weight[k] = fixed[k] + work.offset;
  for (let s = 0; s < work.count; s++) {
    const at = s * side;
    pixelShares(work.x[s] - work.boxX[s], sigma[s], side, work.share, work.first, work.second, at);
    pixelShares(work.y[s] - work.boxY[s], sigma[s], side, work.shareY, work.firstY, work.secondY, at);
    const left = Math.max(0, window.x0 - work.boxX[s]);
    const right = Math.min(side, window.x0 + window.width - work.boxX[s]);
    for (let j = 0; j < side; j++) {
      const row = work.boxY[s] + j - window.y0;
      if (row < 0 || row >= window.height) continue;
      const light = work.n[s] * work.shareY[at + j];
      const shift = row * window.width + work.boxX[s] - window.x0;
      for (let i = left; i < right; i++) weight[shift + i] += light * work.share[at + i];
    }
  }
  let sum = 0;
  for (let k = 0; k < pixels; k++) {
    if (used[k] === 0) {
      weight[k] = 0;
      score[k] = 0;
      continue;
    }
    const expected = weight[k] > EXPECTED_LEAST ? weight[k] : EXPECTED_LEAST;
    const w = 1 / expected;
    weight[k] = w;
    score[k] = data[k] * w - 1;
    if (wanted) sum += data[k] * Math.log(expected) - expected;
  }
  return sum - 0.5 * (work.offset / work.offsetSpreadE) ** 2;
}

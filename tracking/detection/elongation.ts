import type { FitWindow } from './fit-window';
import type { FitWork } from './fit-work';

/** Result of the score test: chi-squared with 2 degrees of freedom for a single spot. */
export interface Elongation {
  score: number;
  /** Half of the vector between the two spots that would explain it best, px. */
  splitX: number;
  splitY: number;
}

/** Score test of whether spot `s` is wider one way than the other; call right after the fit. */
export function measureElongation(work: FitWork, window: FitWindow, s: number, out: Elongation): void {
  const { side } = work;
  const at = s * side;
  let ssE = 0;
  let ssX = 0;
  let infoE = 0;
  let infoX = 0;
  for (let j = 0; j < side; j++) {
    const row = work.boxY[s] + j - window.y0;
    if (row < 0 || row >= window.height) continue;
    const p = work.shareY[at + j];
    const d = work.firstY[at + j];
    const dd = work.secondY[at + j];
    for (let i = 0; i < side; i++) {
      const column = work.boxX[s] + i - window.x0;
      if (column < 0 || column >= window.width) continue;
      const k = row * window.width + column;
      const shapeE = work.second[at + i] * p - work.share[at + i] * dd;
      const shapeX = work.first[at + i] * d;
      ssE += work.score[k] * shapeE;
      ssX += work.score[k] * shapeX;
      infoE += work.weight[k] * shapeE * shapeE;
      infoX += work.weight[k] * shapeX * shapeX;
    }
  }
  out.score = 0;
  if (!(infoE > 0 && infoX > 0)) return;
  out.score = (ssE * ssE) / infoE + (ssX * ssX) / infoX;
  // Half the light at +-d adds n/4 d^2 (cos 2a (Pxx - Pyy) + 2 sin 2a Pxy).
  const cosine = (4 * ssE) / infoE;
  const sine = (2 * ssX) / infoX;
  const half = Math.sqrt(Math.sqrt(cosine * cosine + sine * sine) / work.n[s]);
  const angle = 0.5 * Math.atan2(sine, cosine);
  out.splitX = half * Math.cos(angle);
  out.splitY = half * Math.sin(angle);
}

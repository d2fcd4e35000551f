import type { FitWindow } from './fit-window';
import { PARAMETERS_MOST, type FitWork } from './fit-work';

/** Gradient and Fisher information of (offset, x, y, n, x, y, n, ...). */
export function accumulateInformation(work: FitWork, window: FitWindow): void {
  const { information, gradient, weight, score } = work;
  const pixels = window.width * window.height;
  information.fill(0);
  gradient.fill(0);
  const precision = 1 / work.offsetSpreadE ** 2;
  let w = precision;
  let g = -work.offset * precision;
  for (let k = 0; k < pixels; k++) {
    w += weight[k];
    g += score[k];
  }
  information[0] = w;
  gradient[0] = g;
  for (let s = 0; s < work.count; s++) {
    accumulateSpot(work, window, s);
    for (let t = 0; t < s; t++) accumulatePair(work, window, s, t);
  }
}

function accumulateSpot(work: FitWork, window: FitWindow, s: number): void {
  const { side, weight, score, share, first, information, gradient } = work;
  const at = s * side;
  const left = Math.max(0, window.x0 - work.boxX[s]);
  const right = Math.min(side, window.x0 + window.width - work.boxX[s]);
  let xx = 0;
  let xy = 0;
  let xn = 0;
  let yy = 0;
  let yn = 0;
  let nn = 0;
  let bx = 0;
  let by = 0;
  let bn = 0;
  let gx = 0;
  let gy = 0;
  let gn = 0;
  for (let j = 0; j < side; j++) {
    const row = work.boxY[s] + j - window.y0;
    if (row < 0 || row >= window.height) continue;
    const shift = row * window.width + work.boxX[s] - window.x0;
    let pp = 0;
    let pd = 0;
    let dd = 0;
    let p1 = 0;
    let d1 = 0;
    let sp = 0;
    let sd = 0;
    for (let i = left; i < right; i++) {
      const w = weight[shift + i];
      const r = score[shift + i];
      const p = share[at + i];
      const d = first[at + i];
      const wp = w * p;
      const wd = w * d;
      pp += wp * p;
      pd += wp * d;
      dd += wd * d;
      p1 += wp;
      d1 += wd;
      sp += r * p;
      sd += r * d;
    }
    const p = work.shareY[at + j];
    const d = work.firstY[at + j];
    xx += dd * p * p;
    xy += pd * p * d;
    xn += pd * p * p;
    yy += pp * d * d;
    yn += pp * p * d;
    nn += pp * p * p;
    bx += d1 * p;
    by += p1 * d;
    bn += p1 * p;
    gx += sd * p;
    gy += sp * d;
    gn += sp * p;
  }
  const n = work.n[s];
  const a = 3 * s + 1;
  const rx = a * PARAMETERS_MOST;
  const ry = rx + PARAMETERS_MOST;
  const rn = ry + PARAMETERS_MOST;
  information[rx] = n * bx;
  information[ry] = n * by;
  information[rn] = bn;
  information[rx + a] = n * n * xx;
  information[ry + a] = n * n * xy;
  information[ry + a + 1] = n * n * yy;
  information[rn + a] = n * xn;
  information[rn + a + 1] = n * yn;
  information[rn + a + 2] = nn;
  gradient[a] = n * gx;
  gradient[a + 1] = n * gy;
  gradient[a + 2] = gn;
}

/** Cross terms of spots s > t where their boxes overlap. */
function accumulatePair(work: FitWork, window: FitWindow, s: number, t: number): void {
  const { side, weight, share, first, shareY, firstY, information } = work;
  const x0 = Math.max(work.boxX[s], work.boxX[t], window.x0);
  const x1 = Math.min(work.boxX[s], work.boxX[t]) + side;
  const right = Math.min(x1, window.x0 + window.width);
  const y0 = Math.max(work.boxY[s], work.boxY[t], window.y0);
  const y1 = Math.min(Math.min(work.boxY[s], work.boxY[t]) + side, window.y0 + window.height);
  if (right <= x0 || y1 <= y0) return;
  let xx = 0;
  let xy = 0;
  let xn = 0;
  let yx = 0;
  let yy = 0;
  let yn = 0;
  let nx = 0;
  let ny = 0;
  let nn = 0;
  for (let y = y0; y < y1; y++) {
    const shift = (y - window.y0) * window.width - window.x0;
    const sAt = s * side - work.boxX[s];
    const tAt = t * side - work.boxX[t];
    let pp = 0;
    let pd = 0;
    let dp = 0;
    let dd = 0;
    for (let x = x0; x < right; x++) {
      const w = weight[shift + x];
      const wp = w * share[sAt + x];
      const wd = w * first[sAt + x];
      const p = share[tAt + x];
      const d = first[tAt + x];
      pp += wp * p;
      pd += wp * d;
      dp += wd * p;
      dd += wd * d;
    }
    const ps = shareY[s * side + y - work.boxY[s]];
    const ds = firstY[s * side + y - work.boxY[s]];
    const pt = shareY[t * side + y - work.boxY[t]];
    const dt = firstY[t * side + y - work.boxY[t]];
    xx += dd * ps * pt;
    xy += dp * ps * dt;
    xn += dp * ps * pt;
    yx += pd * ds * pt;
    yy += pp * ds * dt;
    yn += pp * ds * pt;
    nx += pd * ps * pt;
    ny += pp * ps * dt;
    nn += pp * ps * pt;
  }
  const ns = work.n[s];
  const nt = work.n[t];
  const column = 3 * t + 1;
  const rx = (3 * s + 1) * PARAMETERS_MOST + column;
  const ry = rx + PARAMETERS_MOST;
  const rn = ry + PARAMETERS_MOST;
  information[rx] = ns * nt * xx;
  information[rx + 1] = ns * nt * xy;
  information[rx + 2] = ns * xn;
  information[ry] = ns * nt * yx;
  information[ry + 1] = ns * nt * yy;
  information[ry + 2] = ns * yn;
  information[rn] = nt * nx;
  information[rn + 1] = nt * ny;
  information[rn + 2] = nn;
}

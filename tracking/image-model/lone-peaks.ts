import type { Peaks } from '../kernels/kernels';

/**
 * Peaks of at least `clearResponse` with no other peak nearer than `apartPx`, farther than
 * `marginPx` from the border, the clearest first.
 *
 * @param peaks in reading order.
 */
export function lonePeaks(
  peaks: Peaks,
  response: Float32Array,
  width: number,
  height: number,
  clearResponse: number,
  apartPx: number,
  marginPx: number,
): number[] {
  const { at: places, count } = peaks;
  const lone: number[] = [];
  for (let k = 0; k < count; k++) {
    const at = places[k];
    if (response[at] < clearResponse) continue;
    const x = at % width;
    const y = (at - x) / width;
    if (x < marginPx || y < marginPx || x >= width - marginPx || y >= height - marginPx) continue;
    if (!hasNeighbour(k, x, y)) lone.push(at);
  }
  return lone.sort((a, b) => response[b] - response[a] || a - b);

  // Peaks are in reading order, so only those a few rows away need a look.
  function hasNeighbour(k: number, x: number, y: number): boolean {
    for (let step = -1; step <= 1; step += 2) {
      for (let m = k + step; m >= 0 && m < count; m += step) {
        const otherX = places[m] % width;
        const dx = otherX - x;
        const dy = (places[m] - otherX) / width - y;
        if (Math.abs(dy) > apartPx) break;
        if (dx * dx + dy * dy < apartPx * apartPx) return true;
      }
    }
    return false;
  }
}

/** Furthest ring of neighbours that is asked for a value, px. */
const RINGS_MAX = 3;

function ringMean(counts: Float32Array, width: number, height: number, at: number, ring: number): number {
  const [x, y] = [at % width, Math.floor(at / width)];
  let sum = 0;
  let n = 0;
  for (let v = Math.max(0, y - ring); v <= Math.min(height - 1, y + ring); v++) {
    for (let u = Math.max(0, x - ring); u <= Math.min(width - 1, x + ring); u++) {
      const value = counts[v * width + u]!;
      if (Number.isFinite(value)) {
        sum += value;
        n++;
      }
    }
  }
  return n > 0 ? sum / n : NaN;
}

function finiteMean(counts: Float32Array): number {
  let sum = 0;
  let n = 0;
  for (const value of counts) {
    if (Number.isFinite(value)) {
      sum += value;
      n++;
    }
  }
  return n > 0 ? sum / n : 0;
}

/**
 * Replaces pixels that are NaN or infinite, in place, by the mean of the finite pixels around them
 * (3 x 3, else 5 x 5, else 7 x 7, else the frame's mean, else 0), so that they neither draw nor
 * shift a spot. The result depends on the frame alone.
 * @returns how many pixels were replaced.
 */
export function maskNonFinite(counts: Float32Array, width: number, height: number): number {
  const bad: number[] = [];
  for (let i = 0; i < counts.length; i++) if (!Number.isFinite(counts[i]!)) bad.push(i);
  if (bad.length === 0) return 0;
  let mean: number | null = null;
  const values = bad.map((at) => {
    for (let ring = 1; ring <= RINGS_MAX; ring++) {
      const value = ringMean(counts, width, height, at, ring);
      if (Number.isFinite(value)) return value;
    }
    return (mean ??= finiteMean(counts));
  });
  bad.forEach((at, i) => {
    counts[at] = values[i]!;
  });
  return bad.length;
}

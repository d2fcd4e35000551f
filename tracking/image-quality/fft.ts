/**
 * Fast Fourier transform in place (Cooley and Tukey, 1965; radix 2) of `n` values at
 * `start, start + step, ...`.
 * @param n a power of two
 */
function transformLine(
  re: Float64Array,
  im: Float64Array,
  start: number,
  step: number,
  n: number,
  sign: 1 | -1,
): void {
  for (let i = 1, j = 0; i < n; i++) {
    let bit = n >> 1;
    for (; j & bit; bit >>= 1) j ^= bit;
    j ^= bit;
    if (i >= j) continue;
    const [a, b] = [start + i * step, start + j * step];
    [re[a], re[b]] = [re[b]!, re[a]!];
    [im[a], im[b]] = [im[b]!, im[a]!];
  }
  for (let size = 2; size <= n; size *= 2) {
    const half = size / 2;
    for (let k = 0; k < half; k++) {
      const angle = (sign * 2 * Math.PI * k) / size;
      const [c, s] = [Math.cos(angle), Math.sin(angle)];
      for (let i = k; i < n; i += size) {
        const [a, b] = [start + i * step, start + (i + half) * step];
        const [x, y] = [re[b]! * c - im[b]! * s, re[b]! * s + im[b]! * c];
        re[b] = re[a]! - x;
        im[b] = im[a]! - y;
        re[a] = re[a]! + x;
        im[a] = im[a]! + y;
      }
    }
  }
}

/**
 * Two-dimensional Fourier transform in place of `n * n` values, row by row.
 * @param sign -1 forwards; +1 backwards, not divided by `n * n`
 */
export function transformSquare(re: Float64Array, im: Float64Array, n: number, sign: 1 | -1): void {
  for (let row = 0; row < n; row++) transformLine(re, im, row * n, 1, n, sign);
  for (let column = 0; column < n; column++) transformLine(re, im, column, n, n, sign);
}

/** Transforms lines of `n` values in place, one after the other; keeps its tables. */
interface LineTransform {
  /** Real and imaginary parts of the line at hand. */
  re: Float64Array;
  im: Float64Array;
  run(): void;
}

/** Fast Fourier transform (Cooley and Tukey, 1965; radix 2) of lines whose length is a power of two. */
function lineTransform(n: number, sign: 1 | -1): LineTransform {
  const re = new Float64Array(n);
  const im = new Float64Array(n);
  const cosine = new Float64Array(n >> 1);
  const sine = new Float64Array(n >> 1);
  for (let k = 0; k < n >> 1; k++) {
    const angle = (sign * 2 * Math.PI * k) / n;
    cosine[k] = Math.cos(angle);
    sine[k] = Math.sin(angle);
  }
  const reversed = reversedBits(n);
  const run = () => {
    for (let i = 0; i < n; i++) {
      const j = reversed[i];
      if (i >= j) continue;
      const real = re[i];
      const imaginary = im[i];
      re[i] = re[j];
      im[i] = im[j];
      re[j] = real;
      im[j] = imaginary;
    }
    for (let half = 1; half < n; half *= 2) {
      const stride = n / (2 * half);
      for (let from = 0; from < n; from += 2 * half) {
        for (let k = 0; k < half; k++) {
          const a = from + k;
          const b = a + half;
          const c = cosine[k * stride];
          const s = sine[k * stride];
          const x = re[b] * c - im[b] * s;
          const y = re[b] * s + im[b] * c;
          re[b] = re[a] - x;
          im[b] = im[a] - y;
          re[a] += x;
          im[a] += y;
        }
      }
    }
  };
  return { re, im, run };
}

/** Numbers 0 .. n - 1 with their bits in reverse order. */
function reversedBits(n: number): Uint32Array {
  const reversed = new Uint32Array(n);
  for (let i = 1; i < n; i++) reversed[i] = (reversed[i >> 1] >> 1) | (i & 1 ? n >> 1 : 0);
  return reversed;
}

/**
 * Two-dimensional Fourier transform in place of `n * n` values, row by row.
 * @param n a power of two
 * @param sign -1 forwards; +1 backwards, not divided by `n * n`
 */
export function transformSquare(re: Float64Array, im: Float64Array, n: number, sign: 1 | -1): void {
  const line = lineTransform(n, sign);
  for (const [start, step] of [
    [n, 1],
    [1, n],
  ]) {
    for (let k = 0; k < n; k++) {
      const first = k * start;
      for (let i = 0, at = first; i < n; i++, at += step) {
        line.re[i] = re[at];
        line.im[i] = im[at];
      }
      line.run();
      for (let i = 0, at = first; i < n; i++, at += step) {
        re[at] = line.re[i];
        im[at] = line.im[i];
      }
    }
  }
}

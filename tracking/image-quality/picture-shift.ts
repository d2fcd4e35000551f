import { transformSquare } from './fft';

/** A picture reduced to a square whose side is a power of two: the middle of the frame. */
export interface SquareGrid {
  side: number;
  /** Frame pixels per grid cell. */
  bin: number;
  /** First column and row of the frame inside the grid. */
  x: number;
  y: number;
}

const SIDE_MAX = 256;
const SIDE_MIN = 16;

/** The largest such square of a frame, at most 256 cells wide; null when the frame is under 16 px. */
export function squareGrid(width: number, height: number): SquareGrid | null {
  const shorter = Math.min(width, height);
  if (shorter < SIDE_MIN) return null;
  const bin = Math.max(1, Math.floor(shorter / SIDE_MAX));
  const side = 2 ** Math.floor(Math.log2(Math.min(SIDE_MAX, shorter / bin)));
  return { side, bin, x: (width - side * bin) >> 1, y: (height - side * bin) >> 1 };
}

/** Adds a frame's counts to the sums of the grid's cells. */
export function addToGrid(counts: Float32Array, width: number, grid: SquareGrid, sums: Float64Array): void {
  const { side, bin, x, y } = grid;
  for (let row = 0; row < side * bin; row++) {
    const cellRow = Math.floor(row / bin) * side;
    const from = (y + row) * width + x;
    for (let column = 0; column < side * bin; column++) {
      const cell = cellRow + Math.floor(column / bin);
      sums[cell] = sums[cell]! + counts[from + column]!;
    }
  }
}

/** The picture's transform, without its mean, faded out towards the edges (Hann) so that they draw no lines. */
export function spectrum(sums: Float64Array, side: number): { re: Float64Array; im: Float64Array } {
  let total = 0;
  for (let i = 0; i < sums.length; i++) total += sums[i]!;
  const mean = total / sums.length;
  const fade = Float64Array.from({ length: side }, (_, i) => Math.sin((Math.PI * (i + 0.5)) / side) ** 2);
  const re = new Float64Array(sums.length);
  for (let row = 0, i = 0; row < side; row++) {
    for (let column = 0; column < side; column++, i++) {
      re[i] = (sums[i]! - mean) * fade[column]! * fade[row]!;
    }
  }
  const im = new Float64Array(re.length);
  transformSquare(re, im, side, -1);
  return { re, im };
}

type Spectrum = ReturnType<typeof spectrum>;

/** Width of the correlation peak, cells: high frequencies carry noise alone. */
const PEAK_SIGMA_CELLS = 1.5;
/** The peak must stand this many deviations above the correlation's ripple: chance reaches about 5. */
const PEAK_DEVIATIONS_MIN = 8;

/** Correlation of the phases of two spectra, smoothed by a Gaussian of `PEAK_SIGMA_CELLS`. */
function phaseCorrelation(a: Spectrum, b: Spectrum, side: number): Float64Array {
  const re = new Float64Array(side * side);
  const im = new Float64Array(side * side);
  const weight = Float64Array.from({ length: side }, (_, k) => {
    const frequency = (k > side / 2 ? k - side : k) / side;
    return Math.exp(-2 * (Math.PI * PEAK_SIGMA_CELLS * frequency) ** 2);
  });
  for (let i = 1; i < re.length; i++) {
    const x = b.re[i]! * a.re[i]! + b.im[i]! * a.im[i]!;
    const y = b.im[i]! * a.re[i]! - b.re[i]! * a.im[i]!;
    const size = Math.sqrt(x * x + y * y);
    if (size === 0) continue;
    const w = (weight[i % side]! * weight[Math.floor(i / side)]!) / size;
    re[i] = x * w;
    im[i] = y * w;
  }
  transformSquare(re, im, side, 1);
  return re;
}

/** Where the logarithms of a Gaussian peak at -1, 0, +1 have their top: within half a cell. */
function peakOffset(left: number, middle: number, right: number): number {
  if (!(left > 0 && right > 0)) return 0;
  const [l, m, r] = [Math.log(left), Math.log(middle), Math.log(right)];
  const bend = l - 2 * m + r;
  return bend < 0 ? Math.max(-0.5, Math.min(0.5, (l - r) / (2 * bend))) : 0;
}

/**
 * How far the picture moved from spectrum `a` to spectrum `b`, in grid cells to the right and down,
 * by phase correlation (Kuglin and Hines, 1975) with a Gaussian fit to the peak.
 * @returns null when no shift stands out: the pictures have too little in common.
 */
export function pictureShift(a: Spectrum, b: Spectrum, side: number): { x: number; y: number } | null {
  const correlation = phaseCorrelation(a, b, side);
  let top = 0;
  let squares = 0;
  for (let i = 0; i < correlation.length; i++) {
    const value = correlation[i]!;
    if (value > correlation[top]!) top = i;
    squares += value * value;
  }
  const peak = correlation[top]!;
  if (!(peak > PEAK_DEVIATIONS_MIN * Math.sqrt(squares / correlation.length))) return null;
  const at = (x: number, y: number) => correlation[((y + side) % side) * side + ((x + side) % side)]!;
  const [x, y] = [top % side, Math.floor(top / side)];
  const signed = (cells: number) => (cells > side / 2 ? cells - side : cells);
  return {
    x: signed(x + peakOffset(at(x - 1, y), peak, at(x + 1, y))),
    y: signed(y + peakOffset(at(x, y - 1), peak, at(x, y + 1))),
  };
}

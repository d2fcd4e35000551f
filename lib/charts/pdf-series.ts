import { decadeRange, paddedRange, type AxisRange } from './axis-ticks';
import { kernelPoints, type KernelCurve } from './kernel-curve';

export type PdfPopulation = 'trapped' | 'free' | 'undecided' | 'all';
export type PdfComponent = 'x' | 'y' | 'along' | 'across' | 'speed';

/** One bin of a velocity density, SI. The ends of its 95 % band are null where none was drawn. */
export interface PdfBin {
  low_m_s: number;
  high_m_s: number;
  count: number;
  density_s_m: number;
  densityLow?: number | null;
  densityHigh?: number | null;
}

export interface PdfSeries {
  population: PdfPopulation;
  bins: readonly PdfBin[];
  kernel?: KernelCurve | null;
  /** The fit in words, beside the population's name: "tail exponent −3.1 ± 0.2". */
  finding?: string;
}

const MM_S_PER_M_S = 1000;

export const binMiddleMmS = (bin: PdfBin) => ((bin.low_m_s + bin.high_m_s) / 2) * MM_S_PER_M_S;
export const densitySMm = (density: number) => density / MM_S_PER_M_S;

/** Points of a line, mm/s and s/mm; empty bins break it on a log axis and lie on zero on a linear one. */
export function pdfPoints(bins: readonly PdfBin[], log: boolean) {
  return bins.map((bin) => ({
    x: binMiddleMmS(bin),
    y: log && bin.count === 0 ? null : densitySMm(bin.density_s_m),
  }));
}

export interface BandRow {
  x: number;
  low: number;
  high: number;
}

/** The band, in pieces between empty bins: what an empty bin allows is no band around a line. */
export function pdfBands(bins: readonly PdfBin[]): BandRow[][] {
  const bands: BandRow[][] = [];
  let open: BandRow[] | null = null;
  for (const bin of bins) {
    if (bin.count === 0 || typeof bin.densityLow !== 'number' || typeof bin.densityHigh !== 'number') {
      open = null;
      continue;
    }
    if (!open) bands.push((open = []));
    open.push({
      x: binMiddleMmS(bin),
      low: densitySMm(bin.densityLow),
      high: densitySMm(bin.densityHigh),
    });
  }
  return bands;
}

/** Axes around all series: velocities symmetric about zero unless they are speeds. Null without any count. */
export function pdfRanges(
  series: readonly PdfSeries[],
  log: boolean,
  component: PdfComponent,
): { x: AxisRange; y: AxisRange } | null {
  const filled = series.flatMap(({ bins }) => bins.filter((bin) => bin.count > 0));
  if (filled.length === 0) return null;
  const speeds = filled.flatMap((bin) => [Math.abs(bin.low_m_s), Math.abs(bin.high_m_s)]);
  const top = speeds.reduce((a, b) => Math.max(a, b)) * MM_S_PER_M_S;
  const end = paddedRange(0, top, 3).max;
  const densities = filled.map((bin) => densitySMm(bin.density_s_m));
  const curves = series.flatMap(({ kernel }) => (kernel ? kernelPoints(kernel) : []));
  const highest = [...densities, ...curves.map(({ y }) => y)].reduce((a, b) => Math.max(a, b));
  // Room under the lowest bead for the marks of empty bins.
  const lowest = densities.reduce((a, b) => Math.min(a, b));
  const y = log ? decadeRange([lowest * 0.7, highest * 1.5]) : paddedRange(0, highest * 1.05);
  if (!y) return null;
  return { x: { min: component === 'speed' ? 0 : -end, max: end }, y };
}

/** The bin that a label points at: the one nearest to a share of the highest density, on one side of the peak. */
export function labelBin(bins: readonly PdfBin[], share: number, side: 'left' | 'right'): PdfBin | null {
  const filled = bins.filter((bin) => bin.count > 0);
  if (filled.length === 0) return null;
  const peak = filled.reduce((a, b) => (b.density_s_m > a.density_s_m ? b : a));
  const onSide = filled.filter((bin) =>
    side === 'left' ? bin.low_m_s <= peak.low_m_s : bin.low_m_s >= peak.low_m_s,
  );
  const off = (bin: PdfBin) => Math.abs(Math.log(bin.density_s_m / (peak.density_s_m * share)));
  return onSide.reduce((a, b) => (off(b) < off(a) ? b : a));
}

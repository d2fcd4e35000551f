import type { ChartTable } from './chart-table';
import { meanOverBin } from './kernel-curve';
import { densitySMm, type PdfSeries } from './pdf-series';

/** The numbers behind a plot of velocity densities, in its printed units. */
export function pdfTable(series: readonly PdfSeries[]): ChartTable {
  return {
    columns: [
      { name: 'population' },
      { name: 'bin low', unit: 'mm/s' },
      { name: 'bin high', unit: 'mm/s' },
      { name: 'count' },
      { name: 'density', unit: 's/mm' },
      { name: 'low, 95 %', unit: 's/mm' },
      { name: 'high, 95 %', unit: 's/mm' },
      { name: 'kernel, mean of bin', unit: 's/mm' },
    ],
    rows: series.flatMap(({ population, bins, kernel }) =>
      bins.map((bin) => [
        population,
        bin.low_m_s * 1000,
        bin.high_m_s * 1000,
        bin.count,
        densitySMm(bin.density_s_m),
        bin.densityLow == null ? null : densitySMm(bin.densityLow),
        bin.densityHigh == null ? null : densitySMm(bin.densityHigh),
        kernel ? densitySMm(meanOverBin(kernel, bin.low_m_s, bin.high_m_s)) : null,
      ]),
    ),
  };
}

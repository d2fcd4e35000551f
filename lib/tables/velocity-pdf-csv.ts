import type { VelocityPdf } from '@/tracking/velocity-pdf-shape';
import { csvChunks } from './csv-chunks';
import { significant } from './number-text';

export const VELOCITY_PDF_COLUMNS =
  'population,component,lag_s,bin_low_m_s,bin_high_m_s,count,density_s_m,density_low,density_high';

/** `velocity-pdf.csv` in pieces, a row per bin. */
export function velocityPdfCsv(pdfs: Iterable<VelocityPdf>): Generator<string> {
  function* rows() {
    for (const pdf of pdfs) {
      for (let i = 0; i < pdf.count.length; i++) {
        yield [
          pdf.population,
          pdf.component,
          significant(pdf.lagS, 10),
          significant(pdf.edgesMS[i], 8),
          significant(pdf.edgesMS[i + 1], 8),
          pdf.count[i],
          significant(pdf.density[i], 7),
          significant(pdf.densityLow[i], 6),
          significant(pdf.densityHigh[i], 6),
        ].join(',');
      }
    }
  }
  return csvChunks(VELOCITY_PDF_COLUMNS, rows());
}

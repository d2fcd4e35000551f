import { writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { analysisFigures } from '@/lib/figures/analysis-figures';
import { WIDTHS_MM } from '@/lib/figures/figure';
import { chartCsv } from '@/lib/charts/chart-table';
import type { PlannedAnalysis } from '@/lib/exports/plan';
import { motionView } from '@/models/queries/motion-view';
import { pdfView } from '@/models/queries/read-results';
import { FIGURE_ENDINGS, figureFile } from './figure-files';

export interface FigureFiles {
  name: string;
  title: string;
  /** @returns names of the files: each ending at each width, and the numbers behind the figure */
  write(folder: string): Promise<string[]>;
}

/** The figures of an analysis as files at the widths of journals. */
export function figuresOf({
  measures,
}: {
  measures: Pick<PlannedAnalysis['measures'], 'pdfs' | 'motion' | 'estimates'>;
}): FigureFiles[] {
  const { pdfs, motion, estimates } = measures;
  const prepared = { pdfs: pdfs.map(pdfView), motion: motion && motionView(motion), estimates };
  return analysisFigures(prepared).map(({ name, title, draw, table }) => ({
    name,
    title,
    async write(folder) {
      const names = [`${name}.csv`];
      await writeFile(join(folder, names[0]), chartCsv(table));
      for (const widthMm of WIDTHS_MM) {
        const figure = draw(widthMm);
        if (!figure) continue;
        for (const ending of FIGURE_ENDINGS) {
          const file = `${name}-${widthMm}mm.${ending}`;
          await writeFile(join(folder, file), await figureFile(figure, ending));
          names.push(file);
        }
      }
      return names;
    },
  }));
}

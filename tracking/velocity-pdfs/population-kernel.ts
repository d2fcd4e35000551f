import type { PdfKernel, VelocityComponent, VelocityPdf } from '../velocity-pdf-shape';
import { eachSample, type ComponentReader } from './component-samples';
import { independentSamples, kernelEstimate, KERNEL_SAMPLES_LEAST, robustScale } from './kernel-estimate';
import { SampleGrid } from './sample-grid';
import { sampleSpread, type SampleSpread } from './sample-spread';

/** Samples of one population whose histogram is known. */
export interface PopulationSamples {
  tracks: number;
  takes: (track: number) => boolean;
  reader: ComponentReader;
  pdf: Pick<VelocityPdf, 'samples' | 'tracks' | 'meanMS' | 'varianceM2S2'>;
  component: VelocityComponent;
  /** Of all populations together, which may be this one alone. */
  all: SampleSpread;
}

/** Kernel estimate of the density; null below ten samples or where all are equal. */
export function populationKernel(input: PopulationSamples): PdfKernel | null {
  const { tracks, takes, reader, pdf, component, all } = input;
  if (pdf.samples < KERNEL_SAMPLES_LEAST) return null;
  const spread =
    all.samples === pdf.samples ? all : sampleSpread(eachSample(reader, tracks, takes), pdf.samples);
  const scaleMS = robustScale(Math.sqrt(Math.max(0, pdf.varianceM2S2 ?? 0)), spread);
  if (!(scaleMS > 0 && spread.most > spread.least)) return null;
  const grid = new SampleGrid(spread.least, spread.most, spread.median, scaleMS);
  let squares = 0;
  let squaresOfSums = 0;
  for (let i = 0; i < tracks; i++) {
    if (!takes(i)) continue;
    const n = reader.read(i);
    let sum = 0;
    for (let k = 0; k < n; k++) {
      const value = reader.values[k];
      grid.add(value);
      const off = value - pdf.meanMS;
      sum += off;
      squares += off * off;
    }
    squaresOfSums += sum * sum;
  }
  const independent = independentSamples(pdf.samples, pdf.tracks, squares, squaresOfSums);
  return kernelEstimate({ grid, spread, scaleMS, independent, isSpeed: component === 'speed' });
}

import { createRandom, mixSeed } from '../random';
import { packTracks } from '../resampling/packs';
import { POPULATIONS, type Conditions, type Recipe, type Tracks } from '../types';
import type { PdfPopulation, VelocityComponent, VelocityPdf } from '../velocity-pdf-shape';
import { unitFlow } from '../velocities';
import { ComponentReader, countSamples, eachSample, someNoise } from './component-samples';
import { histogram } from './histogram';
import { populationKernel } from './population-kernel';
import { pdfEdges } from './pdf-bins';
import { sampleSpread } from './sample-spread';

const PDF_POPULATIONS: readonly PdfPopulation[] = [...POPULATIONS, 'all'];
/** Noise is looked up on about this many samples to set the width of bins. */
const NOISE_SAMPLES = 1000;

/**
 * Distribution of every velocity component of every population at every lag of the recipe. The
 * components along and across exist where the conditions give a flow direction. Bins are the same
 * for all populations; bands come from resampling whole tracks, since samples of one track depend
 * on each other. Beside each histogram stands a kernel estimate. Populations without a sample are left out.
 */
export function velocityPdfs(
  tracks: Tracks,
  population: Uint8Array,
  conditions: Conditions,
  recipe: Pick<Recipe, 'lagsFrames' | 'bootstrapDraws' | 'seed'>,
  onLag: (done: number, of: number) => void = () => undefined,
): VelocityPdf[] {
  const direction = unitFlow(conditions);
  const flow = direction ?? [1, 0];
  const components: VelocityComponent[] = direction
    ? ['x', 'y', 'along', 'across', 'speed']
    : ['x', 'y', 'speed'];
  const random = createRandom(mixSeed(recipe.seed, 21));
  const packs = packTracks(random, tracks.count, recipe.bootstrapDraws);
  const pdfs: VelocityPdf[] = [];
  recipe.lagsFrames.forEach((lagFrames, place) => {
    onLag(place, recipe.lagsFrames.length);
    const lagS = lagFrames * conditions.frameInterval_s;
    for (const component of components) {
      const reader = new ComponentReader(tracks, lagFrames, conditions, component, flow);
      const samples = countSamples(reader, tracks.count);
      if (samples === 0) return;
      const noise = typicalNoise(someNoise(reader, tracks.count, samples, NOISE_SAMPLES));
      const all = sampleSpread(
        eachSample(reader, tracks.count, () => true),
        samples,
      );
      const edges = pdfEdges(all, noise);
      PDF_POPULATIONS.forEach((name, code) => {
        const takes = (track: number) => name === 'all' || population[track] === code;
        const pdf = histogram({ tracks: tracks.count, takes, reader, edges, ...packs });
        if (!pdf) return;
        const kernel = populationKernel({ tracks: tracks.count, takes, reader, pdf, component, all });
        pdfs.push({ population: name, component, lagFrames, lagS, ...pdf, kernel });
      });
    }
  });
  return pdfs;
}

/** Median of the standard deviations. */
function typicalNoise(variances: number[]): number {
  variances.sort((a, b) => a - b);
  return variances.length > 0 ? Math.sqrt(variances[variances.length >> 1]) : 0;
}

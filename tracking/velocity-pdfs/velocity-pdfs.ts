import { createRandom, mixSeed } from '../random';
import { packTracks } from '../resampling/packs';
import { POPULATIONS, type Conditions, type Recipe, type Tracks } from '../types';
import type { PdfPopulation, VelocityComponent, VelocityPdf } from '../velocity-pdf-shape';
import { unitFlow } from '../velocities';
import { componentNoise, componentOf, lagSamples, type LagSamples } from './component-samples';
import { histogram } from './histogram';
import { pdfEdges } from './pdf-bins';

const PDF_POPULATIONS: readonly PdfPopulation[] = [...POPULATIONS, 'all'];
/** Noise is looked up on about this many samples to set the width of bins. */
const NOISE_SAMPLES = 1000;

/**
 * Distribution of every velocity component of every population at every lag of the recipe. The
 * components along and across exist where the conditions give a flow direction. Bins are the same
 * for all populations; bands come from resampling whole tracks, since samples of one track depend
 * on each other. Populations without a sample are left out.
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
  const { packs, pack, weights } = packTracks(random, tracks.count, recipe.bootstrapDraws);
  const pdfs: VelocityPdf[] = [];
  recipe.lagsFrames.forEach((lagFrames, place) => {
    onLag(place, recipe.lagsFrames.length);
    const samples = lagSamples(tracks, lagFrames, conditions);
    if (samples.vxMS.length === 0) return;
    for (const component of components) {
      const values = componentOf(samples, component, flow);
      const edges = pdfEdges(values.slice().sort(), typicalNoise(samples, component, flow));
      const noise = (i: number) => componentNoise(samples, component, flow, i);
      PDF_POPULATIONS.forEach((name, code) => {
        const takes = (track: number) => name === 'all' || population[track] === code;
        const pdf = histogram({
          tracks: tracks.count,
          takes,
          start: samples.start,
          values,
          noise,
          edges,
          packs,
          pack,
          weights,
        });
        const lagS = lagFrames * conditions.frameInterval_s;
        if (pdf) pdfs.push({ population: name, component, lagFrames, lagS, ...pdf });
      });
    }
  });
  return pdfs;
}

function typicalNoise(
  samples: LagSamples,
  component: VelocityComponent,
  flow: readonly [number, number],
): number {
  const step = Math.max(1, Math.floor(samples.vxMS.length / NOISE_SAMPLES));
  const noise: number[] = [];
  for (let i = 0; i < samples.vxMS.length; i += step) {
    const value = componentNoise(samples, component, flow, i);
    if (Number.isFinite(value)) noise.push(value);
  }
  noise.sort((a, b) => a - b);
  return noise.length > 0 ? Math.sqrt(noise[noise.length >> 1]) : 0;
}

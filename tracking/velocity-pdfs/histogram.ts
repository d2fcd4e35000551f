import { excessKurtosis } from '../populations/transverse-kurtosis';
import type { VelocityPdf } from '../velocity-pdf-shape';
import { bootstrapBand } from './bootstrap-band';
import type { ComponentReader } from './component-samples';
import { binOf } from './pdf-bins';

/** Samples of one component at one lag, and whose they are. */
export interface HistogramInput {
  tracks: number;
  /** Whether a track belongs to the population. */
  takes: (track: number) => boolean;
  reader: ComponentReader;
  edges: readonly number[];
  /** Number of packs of tracks, the pack of a track, and the multiplicities of packs per draw. */
  packs: number;
  pack: Uint8Array;
  weights: Uint16Array;
}

/** Counts, density with its band, and moments; null without a sample. */
export function histogram(
  input: HistogramInput,
): Omit<VelocityPdf, 'population' | 'component' | 'lagFrames' | 'lagS'> | null {
  const { reader, edges, packs } = input;
  const bins = edges.length - 1;
  const widths = Array.from({ length: bins }, (_, b) => edges[b + 1] - edges[b]);
  const counts = new Float64Array(packs * bins);
  const sums = new Float64Array(5);
  let noise = 0;
  let tracks = 0;
  for (let i = 0; i < input.tracks; i++) {
    if (!input.takes(i)) continue;
    const samples = reader.read(i, true);
    if (samples > 0) tracks++;
    for (let k = 0; k < samples; k++) {
      const value = reader.values[k];
      counts[input.pack[i] * bins + binOf(edges, value)]++;
      // In mm/s, so that fourth powers stay of order one.
      for (let m = 0, power = 1; m < 5; m++, power *= 1e3 * value) sums[m] += power;
      noise += reader.noise[k];
    }
  }
  const n = sums[0];
  if (n === 0) return null;
  const count = Array.from({ length: bins }, (_, b) => {
    let sum = 0;
    for (let p = 0; p < packs; p++) sum += counts[p * bins + b];
    return sum;
  });
  const band = bootstrapBand(counts, packs, widths, input.weights);
  const mean = sums[1] / n;
  const kurtosis = excessKurtosis(sums);
  const [first, last] = filledRange(count);
  const cut = <T>(list: readonly T[]) => list.slice(first, last + 1);
  return {
    edgesMS: edges.slice(first, last + 2),
    count: cut(count),
    density: cut(count.map((c, b) => c / (n * widths[b]))),
    densityLow: cut(band ? band.low : count.map(() => null)),
    densityHigh: cut(band ? band.high : count.map(() => null)),
    samples: n,
    tracks,
    meanMS: 1e-3 * mean,
    varianceM2S2: n > 1 ? (1e-6 * (sums[2] - n * mean * mean)) / (n - 1) : null,
    noiseVarianceM2S2: Number.isFinite(noise) ? noise / n : null,
    excessKurtosis: Number.isFinite(kurtosis) ? kurtosis : null,
  };
}

/** Bins before the first and after the last sample of a population say nothing. */
function filledRange(count: readonly number[]): [number, number] {
  const first = count.findIndex((c) => c > 0);
  let last = count.length - 1;
  while (count[last] === 0) last--;
  return [first, last];
}

import { ClusteredRatios } from '../resampling/clustered-ratios';
import { trackPaths } from '../dispersion/track-paths';
import { POPULATIONS, type Conditions, type Tracks } from '../types';
import type { PdfPopulation } from '../velocity-pdf-shape';
import { finite } from './series';

/** Acceleration of one component of one population at one lag. Plain JSON. */
export interface Acceleration {
  population: PdfPopulation;
  component: 'x' | 'y' | 'along' | 'across';
  lagFrames: number;
  lagS: number;
  /** R.m.s. without localization noise, m/s^2, with a 95 % interval over tracks; null where noise may be all of it. */
  rmsMS2: number | null;
  lowMS2: number | null;
  highMS2: number | null;
  /** R.m.s. that localization alone gives, m/s^2; null where positions have no errors. */
  noiseMS2: number | null;
  /** Excess kurtosis of the samples, noise included. */
  excessKurtosis: number | null;
  samples: number;
  tracks: number;
}

const SHOWN: readonly PdfPopulation[] = [...POPULATIONS, 'all'];

/**
 * Second differences (x(t + lag) - 2 x(t) + x(t - lag)) / lag^2 of measured positions. Localization adds
 * (s1^2 + 4 s2^2 + s3^2) / lag^4 to their variance, 6 sigma^2 / lag^4 for equal errors, and is taken off.
 */
export function accelerations(
  tracks: Tracks,
  population: Uint8Array,
  conditions: Conditions,
  lagsFrames: readonly number[],
): Acceleration[] {
  const paths = trackPaths(tracks, conditions);
  const axes = [
    { component: paths.axes[0], place: paths.first, noise: paths.firstNoise },
    { component: paths.axes[1], place: paths.second, noise: paths.secondNoise },
  ];
  const out: Acceleration[] = [];
  for (const lag of lagsFrames) {
    const lagS = lag * conditions.frameInterval_s;
    for (const { component, place, noise } of axes) {
      SHOWN.forEach((name, code) => {
        // Columns: a, a^2, and noise, over samples.
        const sums = new ClusteredRatios(3);
        let [samples, cube, fourth] = [0, 0, 0];
        for (let i = 0; i < tracks.count; i++) {
          if (name !== 'all' && population[i] !== code) continue;
          const row = [0, 0, 0];
          let n = 0;
          const points = paths.read(i);
          for (let p = lag; p + lag < points; p++) {
            if (paths.measured[p - lag] + paths.measured[p] + paths.measured[p + lag] < 3) continue;
            const a = (place[p + lag] - 2 * place[p] + place[p - lag]) / lagS ** 2;
            row[0] += a;
            row[1] += a * a;
            row[2] += (noise[p + lag] + 4 * noise[p] + noise[p - lag]) / lagS ** 4;
            cube += a ** 3;
            fourth += a ** 4;
            n++;
          }
          if (n === 0) continue;
          samples += n;
          sums.add(row, [n, n, n]);
        }
        if (samples === 0) return;
        const mean = sums.ratio(0).value;
        const square = sums.ratio(1);
        const ofNoise = sums.ratio(2).value;
        const noisy = Number.isFinite(ofNoise) ? ofNoise : 0;
        const rms = (of: number | null) =>
          of === null ? null : Math.sqrt(Math.max(0, of - mean * mean - noisy));
        const m2 = square.value - mean * mean;
        const m4 =
          fourth / samples - (4 * mean * cube) / samples + 6 * mean ** 2 * square.value - 3 * mean ** 4;
        const told = square.value - mean * mean > noisy;
        out.push({
          population: name,
          component,
          lagFrames: lag,
          lagS,
          rmsMS2: told ? finite(rms(square.value)) : null,
          lowMS2: told ? finite(rms(square.low)) : null,
          highMS2: finite(rms(square.high)),
          noiseMS2: Number.isFinite(ofNoise) ? Math.sqrt(ofNoise) : null,
          excessKurtosis: samples >= 4 && m2 > 0 ? m4 / m2 ** 2 - 3 : null,
          samples,
          tracks: square.clusters,
        });
      });
    }
  }
  return out;
}

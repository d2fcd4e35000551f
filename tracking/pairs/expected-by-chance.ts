import { TRAPPED } from '../populations/codes';
import { trackSlice } from '../track-slice';
import type { Conditions, Tracks } from '../types';
import { trackVelocities } from '../velocities';
import { chanceApproaches } from './chance-approaches';

/**
 * Meetings that trapped tracks of the same number and speed would have if they were independent;
 * null without any. Their common drift is taken off, and localization noise.
 */
export function expectedByChance(
  tracks: Tracks,
  population: Uint8Array,
  image: { width: number; height: number; frames: number },
  conditions: Pick<Conditions, 'pixelSize_m' | 'frameInterval_s'>,
  reachM: number,
): number | null {
  let n = 0;
  let points = 0;
  const sum = [0, 0];
  const square = [0, 0];
  let noise = 0;
  for (let i = 0; i < tracks.count; i++) {
    if (population[i] !== TRAPPED) continue;
    points += tracks.start[i + 1] - tracks.start[i];
    const v = trackVelocities(trackSlice(tracks, i), 1, conditions);
    for (let k = 0; k < v.frame.length; k++) {
      n++;
      sum[0] += v.vxMS[k];
      sum[1] += v.vyMS[k];
      square[0] += v.vxMS[k] ** 2;
      square[1] += v.vyMS[k] ** 2;
      noise += (v.svxMS[k] ** 2 + v.svyMS[k] ** 2) / 2;
    }
  }
  if (n < 2) return null;
  const seen = (square[0] + square[1]) / (2 * n) - ((sum[0] / n) ** 2 + (sum[1] / n) ** 2) / 2;
  const variance = seen - (Number.isFinite(noise) ? noise / n : 0);
  const areaM2 = image.width * image.height * conditions.pixelSize_m ** 2;
  const durationS = image.frames * conditions.frameInterval_s;
  const perAreaM2 = points / image.frames / areaM2;
  return chanceApproaches(perAreaM2, areaM2, durationS, reachM, Math.sqrt(Math.max(0, variance)));
}

import { FREE, TRAPPED } from '@/tracking/populations/codes';
import { findCandidates } from '@/tracking/pairs/find-candidates';
import { createRandom } from '@/tracking/random';
import { velocityPdfs } from '@/tracking/velocity-pdfs/velocity-pdfs';
import type { Conditions, Tracks } from '@/tracking/types';
import { cpuSeconds } from './cpu-seconds';

/** What one kernel of the flow took on one core. */
export interface FlowRun {
  what: string;
  items: number;
  cpuS: number;
  goalS: number;
}

const TRACKS = 100_000;
const TRACK_FRAMES = 20;
const SAMPLES_PER_TRACK = 50;
const SAMPLES = 1_000_000;
const CONDITIONS: Conditions = { pixelSize_m: 1e-5, frameInterval_s: 5e-3, flowDirection: [1, 0] };

/** Tracks of random motion at random places and times: half of them trapped. */
function randomTracks(count: number, length: number, size: number, frames: number): Tracks {
  const random = createRandom(9);
  const points = count * length;
  const tracks: Tracks = {
    count,
    start: Uint32Array.from({ length: count + 1 }, (_, i) => i * length),
    frame: new Uint32Array(points),
    xPx: new Float32Array(points),
    yPx: new Float32Array(points),
    sxPx: new Float32Array(points).fill(0.1),
    syPx: new Float32Array(points).fill(0.1),
    brightness: new Float32Array(points).fill(300),
    flags: new Uint8Array(points),
  };
  for (let i = 0; i < count; i++) {
    let [x, y] = [size * random.uniform(), size * random.uniform()];
    let [u, v] = [0.5 * random.normal(), 0.5 * random.normal()];
    const first = random.integer(frames - length + 1);
    for (let k = 0; k < length; k++) {
      const p = i * length + k;
      tracks.frame[p] = first + k;
      tracks.xPx[p] = x;
      tracks.yPx[p] = y;
      u = 0.95 * u + 0.15 * random.normal();
      v = 0.95 * v + 0.15 * random.normal();
      x += u;
      y += v;
    }
  }
  return tracks;
}

/** A million velocities to densities with bands; a hundred thousand tracks searched for candidates. */
export async function runFlow(quick: boolean): Promise<FlowRun[]> {
  const part = quick ? 0.1 : 1;
  const few = randomTracks((part * SAMPLES) / SAMPLES_PER_TRACK, SAMPLES_PER_TRACK + 1, 2048, 2000);
  const names = Uint8Array.from({ length: few.count }, (_, i) => (i % 2 ? FREE : TRAPPED));
  const pdfS = await cpuSeconds(() => {
    velocityPdfs(few, names, CONDITIONS, { lagsFrames: [1], bootstrapDraws: 1000, seed: 1 });
  });
  const many = randomTracks(part * TRACKS, TRACK_FRAMES, 2048, Math.max(40, part * 2000));
  const trapped = new Uint8Array(many.count).fill(TRAPPED);
  const image = { width: 2048, height: 2048, frames: Math.max(40, part * 2000) };
  const pairsS = await cpuSeconds(() => {
    findCandidates(many, trapped, image, CONDITIONS, {
      closestApproach_m: 5e-5,
      falseDiscoveryRate: 0.1,
      seed: 1,
    });
  });
  return [
    { what: 'velocities to densities with bands', items: part * SAMPLES, cpuS: pdfS, goalS: part * 10 },
    { what: 'tracks searched for candidates', items: part * TRACKS, cpuS: pairsS, goalS: part * 60 },
  ];
}

/** One line for each, as the summary of the bench has them. */
export const flowGoals = (runs: readonly FlowRun[]): string[] =>
  runs.map(
    ({ what, items, cpuS, goalS }) =>
      `${items} ${what}: ${cpuS.toFixed(1)} s of CPU time, goal ${goalS} s: ${cpuS <= goalS ? 'reached' : 'missed'}`,
  );

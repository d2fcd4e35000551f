import { sheetLight } from '../simulate/sheet-light';
import { createRandom, mixSeed } from '../random';
import type { Frame } from '../types';

/** Length of the recordings whose noise is studied; later frames run through the same light again. */
export const NOISE_FRAMES = 200;
/** Pixels along a side. */
export const NOISE_SIDE_PX = 192;

/** A kind of recording in which there is nothing to find. */
export interface NoiseKind {
  kind: string;
  /** Spot size that is looked for, px. */
  spotSigmaPx: number;
  /** Expected photoelectrons of a frame; the same array may come again. */
  light(frame: number): Float32Array;
  gainCountsPerE: number;
  readNoiseE: number;
  bitDepth: 8 | 16;
  /** Share of pixels that are hot, and electrons in them. */
  hotShare: number;
}

const SPOT_SIGMA_PX = 1.2;
const OFFSET_COUNTS = 20;
const HOT_E = 60;

/** All kinds: even light of three strengths, none, uneven, drifting, hot pixels, coarse counts, small and large spots. */
export const NOISE_KINDS: readonly NoiseKind[] = [
  kind('even light, 0.5 electrons', {}, () => even(0.5)),
  kind('even light, 5 electrons', {}, () => even(5)),
  kind('even light, 50 electrons', {}, () => even(50)),
  kind('read noise only', { readNoiseE: 3 }, () => even(0)),
  kind('rippled sheet', {}, () => movingSheet(0)),
  kind('drifting sheet', {}, (frame) => movingSheet(frame)),
  kind('hot pixels', { hotShare: 0.002 }, () => even(5)),
  kind('8 bit, 0.5 counts per electron', { bitDepth: 8, gainCountsPerE: 0.5 }, () => even(12)),
  kind('small spots', { spotSigmaPx: 0.7 }, () => even(8)),
  kind('large spots', { spotSigmaPx: 2.5 }, () => even(8)),
];

function kind(name: string, change: Partial<NoiseKind>, light: NoiseKind['light']): NoiseKind {
  const usual = { gainCountsPerE: 2, readNoiseE: 1.5, bitDepth: 16, hotShare: 0 } as const;
  // Pictures of light that doesn't change are drawn once.
  const drawn = new Map<number, Float32Array>();
  const changes = name.startsWith('drifting');
  const once = (frame: number) => {
    const time = changes ? frame % NOISE_FRAMES : 0;
    let picture = drawn.get(time);
    if (!picture) drawn.set(time, (picture = light(time)));
    return picture;
  };
  return { kind: name, spotSigmaPx: SPOT_SIGMA_PX, ...usual, ...change, light: once };
}

function even(electrons: number): Float32Array {
  return new Float32Array(NOISE_SIDE_PX * NOISE_SIDE_PX).fill(electrons);
}

/** A sheet of 20 electrons, 0.35 of it at the edges, ripples of 12 %; it moves by a fifth of the image's height. */
function movingSheet(frame: number): Float32Array {
  const high = Math.round(1.5 * NOISE_SIDE_PX);
  const light = sheetLight({ sheetEdgeLight: 0.35 ** 2.25, ripple: 0.12 }, NOISE_SIDE_PX, high);
  const moved = (0.2 * NOISE_SIDE_PX * frame) / NOISE_FRAMES;
  const top = 0.5 * (high - NOISE_SIDE_PX) - 0.1 * NOISE_SIDE_PX + moved;
  const out = new Float32Array(NOISE_SIDE_PX * NOISE_SIDE_PX);
  for (let y = 0; y < NOISE_SIDE_PX; y++) {
    const row = Math.floor(top + y);
    const share = top + y - row;
    for (let x = 0; x < NOISE_SIDE_PX; x++) {
      const above = light[row * NOISE_SIDE_PX + x];
      out[y * NOISE_SIDE_PX + x] = 20 * (above + share * (light[(row + 1) * NOISE_SIDE_PX + x] - above));
    }
  }
  return out;
}

/** A frame of noise; `turn` gives other noise in the same light. */
export function noiseFrame(kind: NoiseKind, frame: number, seed: number): Frame {
  const { gainCountsPerE, readNoiseE, bitDepth, hotShare } = kind;
  const light = kind.light(frame);
  const random = createRandom(mixSeed(seed, frame));
  const most = 2 ** bitDepth - 1;
  const counts = new Float32Array(light.length);
  const hotEvery = Math.round(1 / hotShare);
  for (let i = 0; i < counts.length; i++) {
    // Every so many pixels one is hot; a prime step spreads them over all columns.
    const hot = hotShare > 0 && (i * 7919) % hotEvery === 0 ? HOT_E : 0;
    const e = random.poisson(light[i] + hot) + readNoiseE * random.normal();
    counts[i] = Math.min(most, Math.max(0, Math.round(OFFSET_COUNTS + gainCountsPerE * e)));
  }
  return { width: NOISE_SIDE_PX, height: NOISE_SIDE_PX, counts };
}

import { nthElement } from '../nth-element';

/** About so many pixels are looked at, evenly spread. */
const SAMPLES = 8000;
/** About so many of those tell where the rounds start, which need not be exact. */
const START_SAMPLES = 1000;
const CLIP_SIGMAS = 2.5;
/**
 * Photons make more of far bright values than of far dark ones, so clipping lowers the mean: for a
 * small skewness g, by g s c^3 p(c) / (3 - 6 c p(c)) of noise s at c widths, p the normal density
 * (first term of Edgeworth's series, solved for the level at which the rounds end); g s is
 * b / (b + r^2) for a background b and read variance r^2.
 */
const CLIP_DENSITY = Math.exp(-0.5 * CLIP_SIGMAS * CLIP_SIGMAS) / Math.sqrt(2 * Math.PI);
const CLIPPED_SHARE = (CLIP_SIGMAS ** 3 * CLIP_DENSITY) / (3 - 6 * CLIP_SIGMAS * CLIP_DENSITY);
const ROUNDS = 5;
/** Below this mean background its brightness can't be told, only its offset. */
const BACKGROUND_LEAST_E = 0.5;

/** How a frame's background differs from the recording's: background = scale * model + shift. */
export interface LightLevel {
  scale: number;
  shift: number;
}

/** Pixels from one that is looked at to the next: odd, so that columns take turns. */
export const lightStride = (pixels: number): number => Math.max(1, Math.floor(pixels / SAMPLES)) | 1;

/** Pixels of a frame that are looked at, one after the other, because every round goes over all of them. */
export interface LightSamples {
  count: number;
  electrons: Float32Array;
  background: Float32Array;
}

/** Sums over the samples that lie within `clip` variances of scale * background + shift. */
export type LightSums = (
  scale: number,
  shift: number,
  readVariance: number,
  clip: number,
) => { light: number; expected: number; kept: number };

const room: LightSamples = { count: 0, electrons: new Float32Array(0), background: new Float32Array(0) };
let ratios = new Float64Array(0);

/**
 * Light of one frame relative to the whole stack's background, from the pixels that no spot
 * stands on: the mean of what lies within 2.5 noise widths, found in a few rounds.
 */
export function measureLightLevel(
  electrons: Float32Array,
  background: Float32Array,
  usable: Uint8Array,
  readVariance: number,
): LightLevel {
  const stride = lightStride(background.length);
  const most = Math.ceil(background.length / stride);
  if (room.electrons.length < most) {
    room.electrons = new Float32Array(most);
    room.background = new Float32Array(most);
  }
  room.count = 0;
  for (let i = 0; i < background.length; i += stride) {
    if (usable[i] === 0) continue;
    room.electrons[room.count] = electrons[i];
    room.background[room.count++] = background[i];
  }
  return levelOfSamples(room, readVariance, sumRoom);
}

const sumRoom: LightSums = (scale, shift, readVariance, clip) => {
  const { count, electrons, background } = room;
  let light = 0;
  let expected = 0;
  let kept = 0;
  for (let k = 0; k < count; k++) {
    const level = scale * background[k] + shift;
    const off = electrons[k] - level;
    if (off * off > clip * (Math.max(0, level) + readVariance)) continue;
    light += electrons[k];
    expected += background[k];
    kept++;
  }
  return { light, expected, kept };
};

/** Light level of samples; `sums` goes over them. */
export function levelOfSamples(samples: LightSamples, readVariance: number, sums: LightSums): LightLevel {
  if (samples.count === 0) return { scale: 1, shift: 0 };
  const start = startOf(samples);
  const scaling = start.meanBackground > BACKGROUND_LEAST_E;
  let scale = scaling ? Math.max(0.01, start.medianRatio) : 1;
  let shift = 0;
  for (let round = 0; round < ROUNDS; round++) {
    const { light, expected, kept } = sums(scale, shift, readVariance, CLIP_SIGMAS * CLIP_SIGMAS);
    if (kept === 0 || !(expected > 0 || !scaling)) break;
    const [lastScale, lastShift] = [scale, shift];
    if (scaling) scale = Math.max(0.01, light / expected);
    else shift = (light - expected) / kept;
    if (scale === lastScale && shift === lastShift) break;
  }
  const level = Math.max(0, scale * start.meanBackground + shift);
  const clipped = CLIPPED_SHARE * (level / Math.max(1e-9, level + readVariance));
  return scaling
    ? { scale: scale + clipped / start.meanBackground, shift }
    : { scale, shift: shift + clipped };
}

/** Mean background, and median of electrons over background, of some of the samples. */
function startOf({ count, electrons, background }: LightSamples) {
  const step = Math.max(1, Math.floor(count / START_SAMPLES));
  const looked = Math.ceil(count / step);
  if (ratios.length < looked) ratios = new Float64Array(looked);
  let sum = 0;
  let found = 0;
  for (let k = 0; k < count; k += step) {
    sum += background[k];
    if (background[k] > 0) ratios[found++] = electrons[k] / background[k];
  }
  const medianRatio = found === 0 ? 1 : nthElement(ratios, found, found >> 1);
  return { meanBackground: sum / looked, medianRatio };
}

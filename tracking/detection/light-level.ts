/** About so many pixels are looked at, evenly spread. */
const SAMPLES = 20_000;
const CLIP_SIGMAS = 2.5;
const ROUNDS = 5;
/** Below this mean background its brightness can't be told, only its offset. */
const BACKGROUND_LEAST_E = 0.5;

/** How a frame's background differs from the recording's: background = scale * model + shift. */
export interface LightLevel {
  scale: number;
  shift: number;
}

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
  // Odd, so that columns take turns.
  const stride = Math.max(1, Math.floor(background.length / SAMPLES)) | 1;
  let mean = 0;
  let looked = 0;
  for (let i = 0; i < background.length; i += stride) {
    if (usable[i] === 0) continue;
    mean += background[i];
    looked++;
  }
  if (looked === 0) return { scale: 1, shift: 0 };
  const scaling = mean / looked > BACKGROUND_LEAST_E;
  let scale = scaling ? Math.max(0.01, medianRatio(electrons, background, usable, 7 * stride)) : 1;
  let shift = 0;
  for (let round = 0; round < ROUNDS; round++) {
    let sum = 0;
    let expected = 0;
    let kept = 0;
    for (let i = 0; i < background.length; i += stride) {
      if (usable[i] === 0) continue;
      const level = scale * background[i] + shift;
      const off = electrons[i] - level;
      const variance = Math.max(0, level) + readVariance;
      if (off * off > CLIP_SIGMAS * CLIP_SIGMAS * variance) continue;
      sum += electrons[i];
      expected += background[i];
      kept++;
    }
    if (kept === 0 || !(expected > 0 || !scaling)) break;
    if (scaling) scale = Math.max(0.01, sum / expected);
    else shift = (sum - expected) / kept;
  }
  return { scale, shift };
}

function medianRatio(
  electrons: Float32Array,
  background: Float32Array,
  usable: Uint8Array,
  stride: number,
): number {
  const ratios = new Float32Array(Math.ceil(background.length / stride));
  let count = 0;
  for (let i = 0; i < background.length; i += stride) {
    if (usable[i] === 1 && background[i] > 0) ratios[count++] = electrons[i] / background[i];
  }
  if (count === 0) return 1;
  const sorted = ratios.subarray(0, count).sort();
  return sorted[count >> 1];
}

import type { Frame, RecipeRequest } from '../types';
import { blockStart } from './block-grid';
import type { QuietPixels } from './quiet-pixels';

/** Above this relative standard error the slope of variance against level says nothing of the gain. */
const SLOPE_ERROR_MOST = 0.15;
/** Read noise of a usual scientific camera, electrons, where the recording can't tell it from the gain. */
const READ_NOISE_USUAL_E = 1.5;
/** A block needs this many pairs of quiet pixels to count. */
const PAIRS_LEAST = 30;
const OUTLIER_SIGMAS = 4;
/** A third moment below this many standard errors is none. */
const THIRD_ERRORS_LEAST = 8;

/** What turns camera counts into photoelectrons. */
export interface CameraNoise {
  gainCountsPerE: number;
  offsetCounts: number;
  readNoiseE: number;
}

interface NoiseBlocks {
  level: number[];
  variance: number[];
  /** Pairs of pixels behind each variance. */
  pairs: number[];
}

/**
 * Photon transfer: the variance of the difference of neighbouring frames, halved, rises with the
 * background's level as variance = gain (level - offset) + gain^2 readNoise^2. The slope is the
 * gain. The line's end on the level axis is offset - gain readNoise^2; to part the two, the third
 * central moment of the background is used, which photons make (gain^3 times their mean) and
 * symmetric read noise doesn't. However they are parted, the noise that detection works with,
 * background + readNoise^2, is the same.
 *
 * Where the background is lit so evenly that the line has no slope to speak of, gain follows from
 * variance and third moment under the assumption of a usual read noise; better give it in the
 * recipe then.
 */
export function measureCameraNoise(
  frames: readonly Frame[],
  quietPixels: QuietPixels,
  request: RecipeRequest,
): CameraNoise {
  const blocks =
    frames.length > 1 ? temporalVariances(frames, quietPixels) : spatialVariances(frames[0], quietPixels);
  const level = mean(blocks.level, blocks.pairs);
  const variance = Math.max(1e-12, mean(blocks.variance, blocks.pairs));
  const darkest = Math.min(...blocks.level);
  const givenGain = typeof request.gain === 'number' ? request.gain : undefined;
  const { third, samples } = thirdMoment(frames, quietPixels);
  const givenNoise = typeof request.readNoise_e === 'number' ? request.readNoise_e : undefined;
  const gain =
    givenGain ??
    lineSlope(blocks) ??
    gainOfMoments(variance, third, samples, givenNoise ?? READ_NOISE_USUAL_E) ??
    guessGain(frames, level, variance);
  const end = level - variance / gain;
  let offset: number;
  let readNoise: number;
  if (givenNoise !== undefined) {
    readNoise = givenNoise;
    offset = end + gain * readNoise * readNoise;
  } else {
    const photons = third / gain ** 3;
    offset = Math.min(Math.max(level - gain * photons, end), Math.max(end, darkest));
    readNoise = Math.sqrt(Math.max(0, offset - end) / gain);
  }
  return { gainCountsPerE: gain, offsetCounts: offset, readNoiseE: readNoise };
}

function temporalVariances(frames: readonly Frame[], { grid, quiet, blockLevel }: QuietPixels): NoiseBlocks {
  const out: NoiseBlocks = { level: [], variance: [], pairs: [] };
  const { width, height, columns, rows } = grid;
  for (let r = 0; r < rows; r++) {
    for (let c = 0; c < columns; c++) {
      const x0 = blockStart(c, columns, width);
      const x1 = blockStart(c + 1, columns, width);
      const y1 = blockStart(r + 1, rows, height);
      let total = 0;
      let pairs = 0;
      for (let f = 0; f + 1 < frames.length; f += 2) {
        const a = frames[f].counts;
        const b = frames[f + 1].counts;
        let n = 0;
        let sum = 0;
        let squares = 0;
        for (let y = blockStart(r, rows, height); y < y1; y++) {
          for (let at = y * width + x0, end = y * width + x1; at < end; at++) {
            if (quiet[f][at] === 0 || quiet[f + 1][at] === 0) continue;
            const difference = a[at] - b[at];
            n++;
            sum += difference;
            squares += difference * difference;
          }
        }
        // The mean difference is a change of light, not noise.
        if (n < 2) continue;
        total += squares - (sum * sum) / n;
        pairs += n - 1;
      }
      if (pairs < PAIRS_LEAST) continue;
      out.level.push(blockLevel[r * columns + c]);
      out.variance.push((0.5 * total) / pairs);
      out.pairs.push(pairs);
    }
  }
  return out.level.length > 0 ? out : { level: [0], variance: [1], pairs: [1] };
}

/** A single frame: differences of neighbours along a row, which a smooth background hardly changes. */
function spatialVariances({ counts }: Frame, { grid, quiet, blockLevel }: QuietPixels): NoiseBlocks {
  const out: NoiseBlocks = { level: [], variance: [], pairs: [] };
  const { width, height, columns, rows } = grid;
  for (let r = 0; r < rows; r++) {
    for (let c = 0; c < columns; c++) {
      let squares = 0;
      let pairs = 0;
      for (let y = blockStart(r, rows, height); y < blockStart(r + 1, rows, height); y++) {
        const end = y * width + blockStart(c + 1, columns, width) - 1;
        for (let at = y * width + blockStart(c, columns, width); at < end; at += 2) {
          if (quiet[0][at] === 0 || quiet[0][at + 1] === 0) continue;
          squares += (counts[at] - counts[at + 1]) ** 2;
          pairs++;
        }
      }
      if (pairs < PAIRS_LEAST) continue;
      out.level.push(blockLevel[r * columns + c]);
      out.variance.push((0.5 * squares) / pairs);
      out.pairs.push(pairs);
    }
  }
  return out.level.length > 0 ? out : { level: [0], variance: [1], pairs: [1] };
}

/** Weighted straight line through variance against level, outliers left out; undefined if too uncertain. */
function lineSlope({ level, variance, pairs }: NoiseBlocks): number | undefined {
  const used = level.map(() => true);
  let slope = Number.NaN;
  let error = Infinity;
  for (let round = 0; round < 4; round++) {
    let w = 0;
    let wx = 0;
    let wy = 0;
    for (let i = 0; i < level.length; i++) {
      if (!used[i]) continue;
      w += pairs[i];
      wx += pairs[i] * level[i];
      wy += pairs[i] * variance[i];
    }
    const x0 = wx / w;
    const y0 = wy / w;
    let xx = 0;
    let xy = 0;
    for (let i = 0; i < level.length; i++) {
      if (!used[i]) continue;
      xx += pairs[i] * (level[i] - x0) ** 2;
      xy += pairs[i] * (level[i] - x0) * (variance[i] - y0);
    }
    slope = xy / xx;
    // A variance from n pairs of normal values has the standard error variance sqrt(2 / n).
    error = (y0 * Math.SQRT2) / Math.sqrt(xx);
    for (let i = 0; i < level.length; i++) {
      const expected = y0 + slope * (level[i] - x0);
      const allowed = OUTLIER_SIGMAS * Math.max(expected, 0.1 * y0) * Math.sqrt(2 / pairs[i]);
      used[i] = Math.abs(variance[i] - expected) <= allowed;
    }
  }
  return slope > 0 && error < SLOPE_ERROR_MOST * slope ? slope : undefined;
}

/**
 * Gain that makes both moments of an evenly lit background: variance = g^2 (m + r^2), third = g^3 m
 * for m photoelectrons. Of the two solutions the one in which photons outweigh read noise.
 */
function gainOfMoments(
  variance: number,
  third: number,
  samples: number,
  readNoiseE: number,
): number | undefined {
  // The third moment of n normal values has the standard error sqrt(15 / n) variance^(3/2).
  if (!(third > THIRD_ERRORS_LEAST * Math.sqrt(15 / samples) * variance ** 1.5)) return undefined;
  const excess = (g: number) => variance / g ** 2 - third / g ** 3 - readNoiseE ** 2;
  let low = third / variance;
  let high = 1.5 * low;
  if (excess(high) <= 0) return high;
  for (let i = 0; i < 60; i++) {
    const middle = 0.5 * (low + high);
    if (excess(middle) < 0) low = middle;
    else high = middle;
  }
  return 0.5 * (low + high);
}

/** Without any sign of photons: as if the darkest count were no light. */
function guessGain(frames: readonly Frame[], level: number, variance: number): number {
  let lowest = Infinity;
  for (const { counts } of frames) for (const value of counts) if (value < lowest) lowest = value;
  const span = level - lowest;
  return span > 0 ? variance / span : 1;
}

/** Mean third power of quiet pixels about the background's level, counts^3. */
function thirdMoment(frames: readonly Frame[], { grid, quiet, level }: QuietPixels) {
  let total = 0;
  let count = 0;
  const pixels = grid.width * grid.height;
  for (let f = 0; f < frames.length; f++) {
    const { counts } = frames[f];
    // A brighter frame must not look like a skewed one.
    let shift = 0;
    let seen = 0;
    for (let i = 0; i < pixels; i++) {
      if (quiet[f][i] === 0) continue;
      shift += counts[i] - level[i];
      seen++;
    }
    shift = seen > 0 ? shift / seen : 0;
    for (let i = 0; i < pixels; i++) {
      if (quiet[f][i] === 0) continue;
      const off = counts[i] - level[i] - shift;
      total += off * off * off;
    }
    count += seen;
  }
  return { third: count > 0 ? total / count : 0, samples: count };
}

function mean(values: readonly number[], weights: readonly number[]): number {
  let sum = 0;
  let total = 0;
  for (let i = 0; i < values.length; i++) {
    sum += weights[i] * values[i];
    total += weights[i];
  }
  return sum / total;
}

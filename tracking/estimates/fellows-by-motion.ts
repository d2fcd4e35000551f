import type { Conditions } from '../types';
import {
  errorBetween,
  RESOLVED_SPOT_SIZES,
  type Fellows,
  type TracersOnLines,
  type UntoldOn,
} from './fellows';
import type { LineGroups } from './line-groups';
import { widenForFewLines } from './line-spread';
import type { PairMotion } from './pair-motion';
import { shareOnOneLine } from './share-on-one-line';
import { sumOfSquares } from './shared-motion';
import { fellowLength } from './sheet-geometry';
import type { TrappedPool } from './trapped-pool';
import type { UsedTracks } from './used-tracks';

/** Fewer pairs on one line than this give no length between tracers. */
const PAIRS_MIN = 8;
const ROUNDS_MAX = 12;

/**
 * A tracer on a line has lambda G fellows between two projected distances, where G is known for
 * straight isotropic lines in the sheet. Distances up to the spacing of lines are used, since
 * lines curve beyond it; the spacing is that of the result, found by iteration.
 *
 * Pairs count exp(-d / h): those farther apart than the sheet is thick sit on the few lines that lie in it, and
 * all of them come or stay away together. On simulated lines with a sheet a fifth of their spacing thick that
 * takes a third off the scatter, and changes nothing where the sheet is thicker.
 *
 * @returns null where too few pairs on one line were seen.
 */
export function fellowsByMotion(
  pool: TrappedPool,
  groups: LineGroups,
  used: UsedTracks,
  image: { width: number; height: number; frames: number },
  conditions: Pick<Conditions, 'pixelSize_m'>,
  thicknessM: number,
  spotSizePx: number,
): Fellows | null {
  const pixelM = conditions.pixelSize_m;
  const lowM = RESOLVED_SPOT_SIZES * spotSizePx * pixelM;
  const reachM = groups.reachPx * pixelM;
  if (!groups.told || !(lowM < reachM)) return null;
  let highM = reachM;
  let all: Counted | null = null;
  for (let round = 0; round < ROUNDS_MAX; round++) {
    const now = countAll(highM);
    if (!now) break;
    all = now;
    const next = Math.min(reachM, Math.max(2 * lowM, 1 / Math.sqrt(densityOf(now))));
    if (Math.abs(next - highM) < 0.02 * highM) break;
    highM = next;
  }
  if (!all) return null;
  const counted = count(all.toM, used.pointsByLine, (m) => (used.used[m.trackA] & used.used[m.trackB]) === 1);
  const byLine = { all: onLines(all), used: counted && onLines(counted) };
  const { tracers, pairs, untoldError } = byLine.all;
  // L goes as N^2 / P: what each line adds to its logarithm.
  const square = (on: UntoldOn) => sumOfSquares(tracers.map((n, i) => 2 * n - pairs[on][i]));
  return {
    tracersPerLengthM: all.perLengthM,
    lineDensityM2: densityOf(all),
    pairs: all.pairs,
    lowM,
    highM: all.toM,
    fadeM: thicknessM,
    fellowLengthM: all.fellowLengthM,
    densityError: widenForFewLines(Math.hypot(errorBetween(square), untoldError), pairs.ownLines),
    byLine,
  };

  function countAll(toM: number): Counted | null {
    return count(toM, used.allPointsByLine, () => true);
  }

  function densityOf({ perLengthM }: Counted): number {
    return pool.perAreaM2 / (perLengthM * thicknessM);
  }

  function weightWithin(toM: number, counts: (m: PairMotion) => boolean): (m: PairMotion) => number {
    return (m) => {
      const distanceM = Math.hypot(m.dxPx, m.dyPx) * pixelM;
      if (distanceM < lowM || distanceM >= toM || !counts(m)) return 0;
      // Translation correction (Ohser 1983): a pair is missed where one of it lies outside the image.
      const seen = (1 - Math.abs(m.dxPx) / image.width) * (1 - Math.abs(m.dyPx) / image.height);
      return (Math.exp(-distanceM / thicknessM) * m.common) / image.frames / seen;
    };
  }

  /** @param counts whether a pair belongs to the tracers that are counted. */
  function count(
    toM: number,
    pointsByLine: Float64Array,
    counts: (m: PairMotion) => boolean,
  ): Counted | null {
    const weightOf = weightWithin(toM, counts);
    const rigidByLine = new Float64Array(groups.lines);
    let seen = 0;
    let rigid = 0;
    let telling = 0;
    for (const m of groups.pairs) {
      const weight = weightOf(m);
      telling += weight;
      if (weight === 0 || !m.rigid) continue;
      seen++;
      rigid += weight;
      rigidByLine[groups.line[m.trackA]] += weight;
    }
    if (seen < PAIRS_MIN) return null;
    const chance = groups.wrongChance;
    const told = (rigid - chance * telling) / (1 - chance);
    if (!(told > 0)) return null;
    const untold = shareOnOneLine(groups.untold, groups.line, weightOf);
    const pairs = told + untold.pairs;
    const perFrame = pointsByLine.reduce((a, b) => a + b, 0) / image.frames;
    const fellowLengthM = fellowLength(lowM, toM, thicknessM, thicknessM);
    const perLengthM = (2 * pairs) / (perFrame * fellowLengthM);
    const toldByLine = rigidByLine.map((of) => of / rigid);
    const known = { pointsByLine, toldByLine, told, untold, weightOf };
    return { toM, perFrame, pairs, fellowLengthM, perLengthM, ...known };
  }

  function onLines({ perFrame, perLengthM, pairs, ...counted }: Counted): TracersOnLines {
    const { pointsByLine, toldByLine, told, untold, weightOf } = counted;
    const ownLines = toldByLine.map((of) => of * told);
    for (const m of groups.untold) {
      const half = (untold.share * weightOf(m)) / 2;
      ownLines[groups.line[m.trackA]] += half;
      ownLines[groups.line[m.trackB]] += half;
    }
    return {
      perFrame,
      perLengthM,
      tracers: pointsByLine.map((of) => of / image.frames / perFrame),
      pairs: { toldLines: toldByLine, ownLines: ownLines.map((of) => of / pairs) },
      untoldError: untold.error / pairs,
    };
  }
}

/** Pairs on one line up to a distance, and what follows from them. */
interface Counted {
  toM: number;
  /** Tracers and pairs per frame. */
  perFrame: number;
  pairs: number;
  fellowLengthM: number;
  perLengthM: number;
  pointsByLine: Float64Array;
  /** Share of the pairs told to be on one line, by line; how many pairs those are; how many of the others. */
  toldByLine: Float64Array;
  told: number;
  untold: ReturnType<typeof shareOnOneLine>;
  weightOf: (m: PairMotion) => number;
}

import type { Conditions } from '../types';
import type { LineGroups } from './line-groups';
import type { PairMotion } from './pair-motion';
import { fellowLength } from './sheet-geometry';
import type { TrappedPool } from './trapped-pool';

/** Pairs nearer than this many spot sizes are not seen as two. */
const RESOLVED_SPOT_SIZES = 4;
/** Fewer pairs on one line than this give no length between tracers. */
const PAIRS_MIN = 8;
const ROUNDS_MAX = 12;

/** Tracers per length of line, from tracers that share one. */
export interface Fellows {
  tracersPerLengthM: number;
  /** Line density that follows: N^2 G / (2 P A h), free of how many of the tracers were found. */
  lineDensityM2: number;
  pairs: number;
  /** Projected distances used, m. */
  lowM: number;
  highM: number;
  /** Fellow length of that range, m. */
  fellowLengthM: number;
  /** Pairs per frame, corrected for the edge of the image, summed by line. */
  pairsByLine: Float64Array;
  /** What turns pairs found into pairs that are: chance bonds, pairs that could not tell. */
  correction: number;
}

/**
 * A tracer on a line has lambda G fellows between two projected distances, where G is known for
 * straight isotropic lines in the sheet. Distances up to the spacing of lines are used, since
 * lines curve beyond it; the spacing is that of the result, found by iteration.
 *
 * @returns null where too few pairs on one line were seen.
 */
export function findFellows(
  pool: TrappedPool,
  groups: LineGroups,
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
  let found: Fellows | null = null;
  for (let round = 0; round < ROUNDS_MAX; round++) {
    const now = count(highM);
    if (!now) return found;
    found = now;
    const spacingM = 1 / Math.sqrt(now.lineDensityM2);
    const next = Math.min(reachM, Math.max(2 * lowM, spacingM));
    if (Math.abs(next - highM) < 0.02 * highM) break;
    highM = next;
  }
  return found;

  function count(toM: number): Fellows | null {
    const pairsByLine = new Float64Array(groups.lines);
    let pairs = 0;
    let rigid = 0;
    const weightOf = (m: PairMotion): number => {
      const distance = Math.hypot(m.dxPx, m.dyPx) * pixelM;
      if (distance < lowM || distance >= toM) return 0;
      // Translation correction (Ohser 1983): a pair is missed where one of it lies outside the image.
      const seen = (1 - Math.abs(m.dxPx) / image.width) * (1 - Math.abs(m.dyPx) / image.height);
      return m.common / image.frames / seen;
    };
    let telling = 0;
    for (const m of groups.pairs) {
      const weight = weightOf(m);
      telling += weight;
      if (weight === 0 || !m.rigid) continue;
      pairs++;
      rigid += weight;
      pairsByLine[groups.line[m.trackA]] += weight;
    }
    if (pairs < PAIRS_MIN) return null;
    const untold = groups.untold.reduce((sum, m) => sum + weightOf(m), 0);
    const chance = groups.wrongChance;
    const correction = ((1 - (chance * telling) / rigid) / (1 - chance)) * ((telling + untold) / telling);
    const perFrame = correction * rigid;
    if (!(perFrame > 0)) return null;
    const fellowLengthM = fellowLength(lowM, toM, thicknessM);
    const tracersPerLengthM = (2 * perFrame) / (pool.perFrame * fellowLengthM);
    return {
      tracersPerLengthM,
      lineDensityM2: pool.perAreaM2 / (tracersPerLengthM * thicknessM),
      pairs,
      lowM,
      highM: toM,
      fellowLengthM,
      pairsByLine,
      correction,
    };
  }
}

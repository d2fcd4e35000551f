import type { Conditions } from '../types';
import { RESOLVED_SPOT_SIZES, type Fellows } from './fellows';
import type { LineGroups } from './line-groups';
import { widenForFewLines } from './line-spread';
import type { PairMotion } from './pair-motion';
import { shareOnOneLine } from './share-on-one-line';
import { perhapsOneLine, sumError } from './shared-motion';
import { fellowLength } from './sheet-geometry';
import type { TrappedPool } from './trapped-pool';

/** Fewer pairs on one line than this give no length between tracers. */
const PAIRS_MIN = 8;
const ROUNDS_MAX = 12;

/**
 * A tracer on a line has lambda G fellows between two projected distances, where G is known for
 * straight isotropic lines in the sheet. Distances up to the spacing of lines are used, since
 * lines curve beyond it; the spacing is that of the result, found by iteration.
 *
 * @returns null where too few pairs on one line were seen.
 */
export function fellowsByMotion(
  pool: TrappedPool,
  groups: LineGroups,
  tracersByLine: Float64Array,
  image: { width: number; height: number; frames: number },
  conditions: Pick<Conditions, 'pixelSize_m'>,
  thicknessM: number,
  spotSizePx: number,
): Fellows | null {
  const pixelM = conditions.pixelSize_m;
  const lowM = RESOLVED_SPOT_SIZES * spotSizePx * pixelM;
  const reachM = groups.reachPx * pixelM;
  if (!groups.told || !(lowM < reachM)) return null;
  const perhaps = perhapsOneLine(groups);
  const tracers = tracersByLine.reduce((a, b) => a + b, 0);
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
    const chance = groups.wrongChance;
    const told = (rigid - chance * telling) / (1 - chance);
    const untold = shareOnOneLine(groups.untold, groups.line, weightOf);
    const perFrame = told + untold.pairs;
    if (!(told > 0)) return null;
    const fellowLengthM = fellowLength(lowM, toM, thicknessM);
    const tracersPerLengthM = (2 * perFrame) / (pool.perFrame * fellowLengthM);
    // L goes as N^2 / P and lambda as P / N: what each line adds to their logarithms, lines coming as a Poisson process.
    const errorOf = (ofTracers: number, ofPairs: number): number => {
      const part = tracersByLine.map(
        (n, i) => (ofTracers * n) / tracers + (ofPairs * pairsByLine[i]) / rigid,
      );
      const lines = Math.hypot(sumError(part, perhaps, untold.share), untold.error / perFrame);
      return widenForFewLines(lines, pairsByLine);
    };
    return {
      tracersPerLengthM,
      lineDensityM2: pool.perAreaM2 / (tracersPerLengthM * thicknessM),
      pairs: perFrame,
      lowM,
      highM: toM,
      fellowLengthM,
      densityError: errorOf(2, -1),
      perLengthError: errorOf(-1, 1),
    };
  }
}

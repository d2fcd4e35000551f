import { SumsByTwoLines } from './by-two-lines';
import type { PairMotion } from './pair-motion';

/**
 * How many of some pairs sit on one line, without telling which: the sum of the products of their motions
 * over what it would be if all moved as one. Products of independent motions cancel, so that the share is
 * right on average, however short or still the pairs are; where lines bend it is too low by how much less
 * alike two places of a line move.
 *
 * @param line of each track, as far as they are known.
 */
export function shareOnOneLine(
  pairs: Iterable<PairMotion>,
  line: Int32Array,
  weightOf: (m: PairMotion) => number,
): { share: number; pairs: number; error: number } {
  let all = 0;
  let together = 0;
  let asOne = 0;
  for (const m of pairs) {
    const weight = weightOf(m);
    if (weight === 0) continue;
    all += weight;
    together += weight * m.together;
    asOne += weight * m.asOne;
  }
  if (!(asOne > 0)) return { share: 0, pairs: 0, error: 0 };
  const share = Math.min(1, Math.max(0, together / asOne));
  const byLines = new SumsByTwoLines(line);
  for (const m of pairs) {
    const weight = weightOf(m);
    if (weight !== 0) byLines.add(m, weight * (m.together - share * m.asOne));
  }
  return { share, pairs: share * all, error: (all * byLines.error()) / asOne };
}

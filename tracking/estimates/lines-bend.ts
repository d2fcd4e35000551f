import { SumsByTwoLines } from './by-two-lines';
import type { LineGroups } from './line-groups';

/** Pairs that move alike beyond those that move as one: by so many standard errors, and by such a part. */
const ERRORS_LEAST = 2.5;
const PART_LEAST = 0.3;

/**
 * True where lines bend: of near pairs, more move alike than keep their distance as on one line that
 * moves as a whole. How alike two tracers move is 1 on average where they move as one and 0 where they
 * know nothing of each other.
 *
 * @param lowPx two tracers nearer than this are not seen as two; pairs up to `highPx` are looked at.
 */
export function linesBend(
  { pairs, line }: Pick<LineGroups, 'pairs' | 'line'>,
  lowPx: number,
  highPx: number,
): boolean {
  let [more, rigid] = [0, 0];
  const byLines = new SumsByTwoLines(line);
  for (const m of pairs) {
    const distance = Math.hypot(m.dxPx, m.dyPx);
    if (distance < lowPx || distance >= highPx || !(m.asOne > 0)) continue;
    if (m.rigid) {
      rigid += m.common;
      continue;
    }
    const alike = (m.common * m.together) / m.asOne;
    more += alike;
    byLines.add(m, alike);
  }
  return more > ERRORS_LEAST * byLines.error() && more > PART_LEAST * rigid;
}

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
  // All pairs of tracers of the same two lines say the same again.
  const byLines = new Map<string, number>();
  for (const m of pairs) {
    const distance = Math.hypot(m.dxPx, m.dyPx);
    if (distance < lowPx || distance >= highPx || !(m.asOne > 0)) continue;
    if (m.rigid) {
      rigid += m.common;
      continue;
    }
    const alike = (m.common * m.together) / m.asOne;
    more += alike;
    const [a, b] = [line[m.trackA], line[m.trackB]];
    const key = a < b ? `${a} ${b}` : `${b} ${a}`;
    byLines.set(key, (byLines.get(key) ?? 0) + alike);
  }
  let square = 0;
  for (const of of byLines.values()) square += of * of;
  return more > ERRORS_LEAST * Math.sqrt(square) && more > PART_LEAST * rigid;
}

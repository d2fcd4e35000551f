import type { Random } from '../random';

/**
 * Poisson bootstrap over lines: in each draw every line counts a Poisson(1) number of times, so
 * that the number of lines varies as it does from one place of a tangle to another.
 *
 * @param sums quantities that add up over lines.
 * @param of what is wanted of the sums.
 */
export function resampleLines(
  random: Random,
  lines: number,
  sums: readonly ArrayLike<number>[],
  draws: number,
  of: (totals: number[]) => number,
): number[] {
  const out: number[] = [];
  for (let d = 0; d < draws; d++) {
    const totals = sums.map(() => 0);
    for (let i = 0; i < lines; i++) {
      const times = random.poisson(1);
      if (times === 0) continue;
      for (let s = 0; s < sums.length; s++) totals[s] += times * sums[s][i];
    }
    out.push(of(totals));
  }
  return out;
}

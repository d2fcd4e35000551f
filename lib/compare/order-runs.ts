import type { ComparedRun } from '../views/compare-view';

export type SortValue = number | string | null;

/** Runs in order of what `valueOf` says of them; what is unknown stands last either way. */
export function orderRuns(
  runs: readonly ComparedRun[],
  valueOf: (run: ComparedRun) => SortValue,
  descending: boolean,
): ComparedRun[] {
  const sign = descending ? -1 : 1;
  return [...runs].sort((a, b) => {
    const [x, y] = [valueOf(a), valueOf(b)];
    if (x === null || y === null) return Number(x === null) - Number(y === null);
    if (typeof x === 'string' || typeof y === 'string') return sign * String(x).localeCompare(String(y));
    return sign * (x - y);
  });
}

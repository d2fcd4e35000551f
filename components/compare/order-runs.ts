import type { ComparedRun } from '@/lib/views/compare-view';

type Value = number | string | null;

/** Columns that the table of runs can be ordered by. */
export const RUN_SORTS: Record<string, (run: ComparedRun) => Value> = {
  campaign: ({ campaignName }) => campaignName.toLowerCase(),
  temperature: ({ temperature_K }) => temperature_K,
  heatFlux: ({ heatFlux_W_m2 }) => heatFlux_W_m2,
  vns: ({ vns_m_s }) => (vns_m_s ? Math.abs(vns_m_s.value) : null),
  density: ({ lineDensity_m2 }) => lineDensity_m2?.value ?? null,
  trapped: ({ trappedShare }) => trappedShare?.value ?? null,
  events: ({ acceptedCandidates }) => acceptedCandidates,
};

/** Runs in order of a column, `-` before it for descending; what is unknown stands last. */
export function orderRuns(runs: readonly ComparedRun[], sort: string): ComparedRun[] {
  const valueOf = RUN_SORTS[sort.replace(/^-/, '')] ?? RUN_SORTS.campaign;
  const sign = sort.startsWith('-') ? -1 : 1;
  return [...runs].sort((a, b) => {
    const [x, y] = [valueOf(a), valueOf(b)];
    if (x === null || y === null) return Number(x === null) - Number(y === null);
    if (typeof x === 'string' || typeof y === 'string') return sign * String(x).localeCompare(String(y));
    return sign * (x - y);
  });
}

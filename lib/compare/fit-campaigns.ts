import { gammaAt } from '@/tracking/flow/steady-tangle';
import { Z95 } from '@/tracking/normal-tail';
import { fitSteadyTangle } from '@/tracking/steady-tangle/fit-steady-tangle';
import type { ComparedFit, ComparedRun } from '../views/compare-view';

const RUNS_LEAST = 3;
/** Runs that differ by more in temperature have different gammas. */
const TEMPERATURE_SPAN_K = 0.05;

/** Why a run can't take part in the fit of L^(1/2) against v_ns; null where it can. */
export function whyLeftOut(run: Omit<ComparedRun, 'leftOut'>): string | null {
  if (run.exclusion !== null) return `Left out by ${run.exclusion.by}: ${run.exclusion.reason}`;
  if (run.analysisId === null) return 'No analysis of this run is done.';
  const density = run.lineDensity_m2;
  if (density === null) return 'The method gives no line density here.';
  if (density.low === null || density.high === null) return 'The line density has no interval.';
  if (run.vns_m_s === null) return 'The counterflow velocity is not known.';
  if (run.vns_m_s.error === null || run.vns_m_s.value === 0) return 'There is no counterflow.';
  return null;
}

/** L^(1/2), 1/m, with its standard error from the interval of ln L. */
export function rootDensity({
  value,
  low,
  high,
}: {
  value: number;
  low: number | null;
  high: number | null;
}) {
  const root = Math.sqrt(value);
  const lnError = low !== null && high !== null ? Math.log(high / low) / (2 * Z95) : Number.NaN;
  return { root, error: 0.5 * lnError * root };
}

/** gamma and v_0 of every campaign, or why they can't be told. */
export function fitCampaigns(runs: readonly ComparedRun[]): ComparedFit[] {
  const campaigns = new Map<string, ComparedRun[]>();
  for (const run of runs) campaigns.set(run.campaignId, [...(campaigns.get(run.campaignId) ?? []), run]);
  return [...campaigns.values()].map((all) => {
    const used = all.filter(({ leftOut }) => leftOut === null);
    const temperatures = used.flatMap(({ temperature_K }) => (temperature_K === null ? [] : [temperature_K]));
    const temperature_K =
      temperatures.length > 0 ? temperatures.reduce((a, b) => a + b, 0) / temperatures.length : null;
    const published = temperature_K === null ? Number.NaN : gammaAt(temperature_K);
    const base = {
      campaignId: all[0].campaignId,
      campaignName: all[0].campaignName,
      runs: used.length,
      temperature_K,
      publishedGamma_s_m2: Number.isNaN(published) ? null : published,
    };
    const none = (note: string): ComparedFit => ({ ...base, gamma_s_m2: null, v0_m_s: null, note });
    if (used.length < RUNS_LEAST) {
      return none(`A fit needs at least ${RUNS_LEAST} runs with a line density and a counterflow velocity.`);
    }
    const vnsMS = used.map(({ vns_m_s }) => Math.abs(vns_m_s?.value ?? Number.NaN));
    if (new Set(vnsMS).size < 2) return none('All runs have the same counterflow velocity.');
    const roots = used.map(({ lineDensity_m2 }) => rootDensity(lineDensity_m2!));
    const { gammaSM2, v0MS, caution } = fitSteadyTangle({
      vnsMS,
      vnsErrorMS: used.map(({ vns_m_s }) => vns_m_s?.error ?? Number.NaN),
      rootDensityPerM: roots.map(({ root }) => root),
      rootDensityErrorPerM: roots.map(({ error }) => error),
    });
    const finite = (value: number) => (Number.isFinite(value) ? value : null);
    return {
      ...base,
      gamma_s_m2: gammaSM2,
      v0_m_s: { value: v0MS.value, low: finite(v0MS.low), high: finite(v0MS.high) },
      note: [caution, spanNote(temperatures)].filter(Boolean).join(' ') || null,
    };
  });
}

function spanNote(temperaturesK: readonly number[]): string | null {
  const [least, most] = [Math.min(...temperaturesK), Math.max(...temperaturesK)];
  if (!(most - least > TEMPERATURE_SPAN_K)) return null;
  return `The runs lie between ${least.toFixed(2)} and ${most.toFixed(2)} K, and γ depends on the temperature.`;
}

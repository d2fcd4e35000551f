import { eventRate } from '@/lib/compare/event-rate';
import { fitCampaigns, whyLeftOut } from '@/lib/compare/fit-campaigns';
import { COMPARED_METHODS, type CompareQuery } from '@/lib/schemas/compare';
import type { ComparedRun, CompareView } from '@/lib/views/compare-view';
import type { DerivedEntry } from '@/tracking/flow/derived-run';
import { iso } from './person';
import { agreementOf } from './run-agreement';
import { selectRows } from './select';
import { selectedRuns, type ChosenAnalysis, type SelectedRun } from './selected-runs';

/** Runs of a laboratory side by side, and the steady law fitted to those of each campaign. */
export async function compareRuns(
  labId: string,
  { method, ...selection }: CompareQuery,
): Promise<CompareView> {
  const { runs: found, cut } = await selectedRuns(labId, selection);
  const [campaigns, tags, agreement] = await Promise.all([
    campaignsToChoose(labId),
    tagsToChoose(labId),
    agreementOf(labId, found.flatMap((run) => run.found?.analysisId ?? [])), // prettier-ignore
  ]);
  const runs = found.map((run) => comparedRun(run, method, agreement));
  return { method, campaigns, tags, runs, fits: fitCampaigns(runs), cut };
}

/** Every campaign of the laboratory with the number of its runs. */
export const campaignsToChoose = (labId: string): Promise<CompareView['campaigns']> =>
  selectRows(
    `SELECT c.id, c.name, count(r.id)::int AS runs FROM campaigns c
     JOIN runs r ON r.campaign_id = c.id AND r.deleted_at IS NULL
     WHERE c.lab_id = $1 AND c.deleted_at IS NULL AND NOT c.rehearsal GROUP BY c.id ORDER BY c.created_at, c.id`,
    [labId],
  );

/** Every tag of a run or a campaign. */
export async function tagsToChoose(labId: string): Promise<string[]> {
  const rows = await selectRows<{ tag: string }>(
    `SELECT DISTINCT tag FROM (
       SELECT unnest(r.tags) AS tag FROM runs r WHERE r.lab_id = $1 AND r.deleted_at IS NULL
       UNION ALL
       SELECT unnest(c.tags) FROM campaigns c WHERE c.lab_id = $1 AND c.deleted_at IS NULL AND NOT c.rehearsal) t
     ORDER BY tag LIMIT 200`,
    [labId],
  );
  return rows.map(({ tag }) => tag);
}

function comparedRun(
  row: SelectedRun,
  method: string,
  agreement: Awaited<ReturnType<typeof agreementOf>>,
): ComparedRun {
  const { conditions, found } = row;
  const densities = densitiesOf(found);
  const { method: _own, ...density } = densities.find((one) => one.method === method) ?? { method: null };
  const run: Omit<ComparedRun, 'leftOut'> = {
    campaignId: row.campaign_id,
    campaignName: row.campaign_name,
    runId: row.id,
    runName: row.name,
    startedAt: iso(row.started_at),
    tags: row.tags,
    analysisId: found?.analysisId ?? null,
    drive: conditions.drive ?? null,
    temperature_K: conditions.temperature_K ?? null,
    pressure_Pa: conditions.pressure_Pa ?? null,
    heatFlux_W_m2: conditions.heatFlux_W_m2 ?? null,
    vn_m_s: withError(row.vn),
    vs_m_s: withError(row.vs),
    vns_m_s: withError(row.vns),
    lineDensity_m2: 'value' in density ? density : null,
    lineDensities_m2: densities,
    trappedShare: found?.trapped
      ? { value: found.trapped.value, low: found.trapped.low, high: found.trapped.high }
      : null,
    tracks: found?.summary.tracks ?? null,
    acceptedCandidates: found?.summary.acceptedCandidates ?? null,
    // Where nobody has judged yet, no event is not the same as none.
    events: found && {
      ...found.events,
      perVolumeTime_m3_s:
        found.events.judged === 0 && found.events.candidates > 0
          ? null
          : eventRate(found.events.confirmed, found),
    },
    tailExponent: tailOf(found),
    agreement: (found && agreement.get(found.analysisId)) ?? null,
    signedOff: found?.signedOffAt
      ? { at: new Date(found.signedOffAt).toISOString(), by: found.signedOffBy }
      : null,
    exclusion: row.exclusion && { ...row.exclusion, at: new Date(row.exclusion.at).toISOString() },
  };
  return { ...run, leftOut: whyLeftOut(run) };
}

function densitiesOf(found: ChosenAnalysis | null): ComparedRun['lineDensities_m2'] {
  const known = (found?.estimates ?? []).filter(({ quantity }) => quantity === 'line_density');
  return COMPARED_METHODS.flatMap((method) => {
    const one = known.find((estimate) => estimate.method === method);
    return one && one.value !== null ? [{ method, value: one.value, low: one.low, high: one.high }] : [];
  });
}

function tailOf(found: ChosenAnalysis | null): ComparedRun['tailExponent'] {
  const tail = (found?.tails ?? []).filter(({ exponent }) => exponent !== null).sort((a, b) => a.lagS - b.lagS)[0]; // prettier-ignore
  return tail ? { value: tail.exponent!, low: tail.exponentLow, high: tail.exponentHigh } : null;
}

function withError({ value, relativeError }: DerivedEntry): { value: number; error: number | null } | null {
  if (value === null) return null;
  return { value, error: relativeError === null ? null : Math.abs(value) * relativeError };
}

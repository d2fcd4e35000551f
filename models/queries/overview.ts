import type { AnalysisSummary } from '@/lib/analysis-facts';
import type { ArrivingStack, OverviewView, ResultRow } from '@/lib/views/overview-view';
import type { Estimate } from '@/tracking/estimates/estimate';
import { receivedByRecording } from './received-bytes';
import { TAKEN } from './rehearsal-mark';
import { selectRow, selectRows } from './select';
import { signedOffSql } from './signed-off';

/** Rows of each part of the overview; the rest is a click away. */
const ROWS = 6;

interface Counts {
  campaigns: number;
  running: number;
  waiting: number;
  failed: number;
  refused: number;
  rehearsals: number;
  members: number;
  unsigned: number;
  packages: number;
}

/** What waits in a laboratory and what is new, for the first page. */
export async function labOverview(labId: string, userId: string): Promise<OverviewView> {
  const counts = await selectRow<Counts>(
    `SELECT
       (SELECT count(*)::int FROM campaigns WHERE lab_id = $1 AND deleted_at IS NULL AND NOT rehearsal) AS campaigns,
       (SELECT count(*)::int FROM memberships WHERE lab_id = $1) AS members,
       (SELECT count(*)::int FROM recordings g WHERE g.lab_id = $1 AND g.state = 'refused' AND g.deleted_at IS NULL
          AND ${TAKEN}) AS refused,
       (SELECT count(*)::int FROM rehearsals WHERE lab_id = $1 AND deleted_at IS NULL) AS rehearsals,
       count(*) FILTER (WHERE a.state = 'running')::int AS running,
       count(*) FILTER (WHERE a.state = 'waiting')::int AS waiting,
       count(*) FILTER (WHERE a.state = 'failed')::int AS failed,
       count(*) FILTER (WHERE a.state = 'done' AND NOT (${signedOffSql}))::int AS unsigned,
       (SELECT count(*)::int FROM exports e WHERE e.lab_id = $1 AND e.created_by = $2 AND e.state = 'done'
          AND e.finished_at > now() - interval '7 days') AS packages
     FROM analyses a JOIN recordings g ON g.id = a.recording_id AND g.deleted_at IS NULL
     WHERE a.lab_id = $1 AND ${TAKEN}`,
    [labId, userId],
  );
  const [arriving, results] = await Promise.all([arrivingStacks(labId, userId), newResults(labId)]);
  return { counts: counts!, arriving, results };
}

async function arrivingStacks(labId: string, userId: string): Promise<ArrivingStack[]> {
  const rows = await selectRows<{
    id: string;
    name: string;
    bytes: string;
    run_id: string;
    run_name: string;
  }>(
    `SELECT g.id, g.name, g.bytes, r.id AS run_id, r.name AS run_name
     FROM recordings g JOIN runs r ON r.id = g.run_id AND r.deleted_at IS NULL
     WHERE g.lab_id = $1 AND g.created_by = $2 AND g.state = 'arriving' AND g.deleted_at IS NULL
     ORDER BY g.created_at DESC LIMIT ${ROWS}`,
    [labId, userId],
  );
  const received = await receivedByRecording(rows.map(({ id }) => id));
  return rows.map((row) => ({
    recordingId: row.id,
    name: row.name,
    bytes: Number(row.bytes),
    receivedBytes: received.get(row.id) ?? 0,
    runId: row.run_id,
    runName: row.run_name,
  }));
}

interface ResultSource {
  id: string;
  recording_name: string;
  run_id: string;
  run_name: string;
  temperature_k: number | null;
  heat_flux_w_m2: number | null;
  finished_at: Date;
  summary: AnalysisSummary;
  estimates: Estimate[] | null;
}

async function newResults(labId: string): Promise<ResultRow[]> {
  const rows = await selectRows<ResultSource>(
    `SELECT a.id, g.name AS recording_name, r.id AS run_id, r.name AS run_name, r.temperature_k, r.heat_flux_w_m2,
       a.finished_at, a.summary,
       (SELECT jsonb_path_query_array(m.estimates, '$[*] ? (@.quantity == "line_density")') FROM analysis_measures m
        WHERE m.analysis_id = a.id ORDER BY m.tracks_revision DESC LIMIT 1) AS estimates
     FROM analyses a JOIN recordings g ON g.id = a.recording_id AND g.deleted_at IS NULL
       JOIN runs r ON r.id = g.run_id AND r.deleted_at IS NULL
     WHERE a.lab_id = $1 AND a.state = 'done' AND a.summary IS NOT NULL AND ${TAKEN}
     ORDER BY a.finished_at DESC, a.id DESC LIMIT ${ROWS}`,
    [labId],
  );
  return rows.map((row) => ({
    analysisId: row.id,
    recordingName: row.recording_name,
    runId: row.run_id,
    runName: row.run_name,
    temperature_K: row.temperature_k,
    heatFlux_W_m2: row.heat_flux_w_m2,
    finishedAt: row.finished_at.toISOString(),
    tracks: row.summary.tracks,
    trapped: row.summary.trapped,
    free: row.summary.free,
    acceptedCandidates: row.summary.acceptedCandidates,
    lineDensity: (row.estimates ?? []).map(({ method, value, low, high }) => ({ method, value, low, high })),
  }));
}

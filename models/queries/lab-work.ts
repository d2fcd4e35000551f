import type { z } from 'zod';
import type { jobListQuery, workerListQuery } from '@/lib/schemas/list-query';
import type { ListView } from '@/lib/views/common';
import type { JobView, WorkerView } from '@/lib/views/lab-view';
import { listPage } from './list-page';
import { iso } from './person';

interface JobRow {
  id: string;
  kind: string;
  subject_id: string;
  chunk: number;
  state: JobView['state'];
  attempt: number;
  attempts_most: number;
  next_at: Date | null;
  recording_name: string | null;
  progress: number;
  error_code: string | null;
  error_detail: string | null;
  created_at: Date;
  updated_at: Date;
}

/** Work of a laboratory, newest first. */
export async function listJobs(
  labId: string,
  query: z.output<typeof jobListQuery>,
): Promise<ListView<JobView>> {
  const bind: unknown[] = [labId];
  const where = ['j.lab_id = $1'];
  if (query.state) where.push(`j.state = $${bind.push(query.state)}`);
  if (query.kind) where.push(`j.kind = $${bind.push(query.kind)}`);
  const page = await listPage<JobRow>(
    {
      select: `j.id, j.kind, j.subject_id, j.chunk, j.state, j.attempt, j.max_attempts AS attempts_most, j.progress,
        j.error_code, j.error_detail, j.created_at, j.updated_at,
        CASE WHEN j.state = 'waiting' AND j.not_before > now() THEN j.not_before END AS next_at,
        coalesce((SELECT g.name FROM recordings g WHERE g.id = j.subject_id AND g.lab_id = j.lab_id),
          (SELECT g.name FROM analyses a JOIN recordings g ON g.id = a.recording_id
           WHERE a.id = j.subject_id AND a.lab_id = j.lab_id),
          (SELECT h.name FROM rehearsals h WHERE h.id = j.subject_id AND h.lab_id = j.lab_id)) AS recording_name`,
      from: 'job_runs j',
      where,
      bind,
      idColumn: 'j.id',
      sorts: {
        createdAt: { by: 'j.created_at', type: 'timestamptz' },
        updatedAt: { by: 'j.updated_at', type: 'timestamptz' },
      },
    },
    query,
  );
  const items = page.rows.map((row) => ({
    id: row.id,
    kind: row.kind,
    subjectId: row.subject_id,
    recordingName: row.recording_name,
    chunk: row.chunk,
    state: row.state,
    attempt: row.attempt,
    attemptsMost: row.attempts_most,
    nextAt: iso(row.next_at),
    progress: row.progress,
    error: row.error_code ? { code: row.error_code, detail: row.error_detail ?? '' } : null,
    createdAt: row.created_at.toISOString(),
    updatedAt: row.updated_at.toISOString(),
  }));
  return { items, nextCursor: page.nextCursor };
}

interface WorkerRow {
  id: string;
  host: string;
  pid: number;
  started_at: Date;
  heartbeat_at: Date;
  silent_s: number;
  alive: boolean;
  code_version: string;
  job: WorkerView['job'];
}

/** Workers serve all laboratories; what one works on is shown to the laboratory that it works for. */
export async function listWorkers(
  labId: string,
  query: z.output<typeof workerListQuery>,
): Promise<ListView<WorkerView>> {
  const page = await listPage<WorkerRow>(
    {
      select: `w.id, w.host, w.pid, w.started_at, w.heartbeat_at, w.code_version,
        extract(epoch FROM now() - w.heartbeat_at)::float8 AS silent_s,
        w.stopped_at IS NULL AND w.heartbeat_at > now() - interval '20 seconds' AS alive,
        (SELECT json_build_object('kind', j.kind, 'chunk', j.chunk, 'progress', j.progress) FROM job_runs j
         WHERE j.id = w.job_run_id AND j.lab_id = $1 AND j.state = 'running') AS job`,
      from: 'workers w',
      where: ['$1::uuid IS NOT NULL'],
      bind: [labId],
      idColumn: 'w.id',
      sorts: {
        startedAt: { by: 'w.started_at', type: 'timestamptz' },
        heartbeatAt: { by: 'w.heartbeat_at', type: 'timestamptz' },
      },
    },
    query,
  );
  const items = page.rows.map((row) => ({
    id: row.id,
    host: row.host,
    pid: row.pid,
    startedAt: row.started_at.toISOString(),
    heartbeatAt: row.heartbeat_at.toISOString(),
    silent_s: Math.max(0, row.silent_s),
    alive: row.alive,
    codeVersion: row.code_version,
    job: row.job,
  }));
  return { items, nextCursor: page.nextCursor };
}

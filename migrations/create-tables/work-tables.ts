/** Work that workers do, and the workers themselves. */
export const workTables = [
  `CREATE TABLE job_runs (
    id uuid PRIMARY KEY,
    lab_id uuid NOT NULL REFERENCES labs,
    kind text NOT NULL,
    -- The recording or analysis that the work is for.
    subject_id uuid NOT NULL,
    -- Which chunk of frames, -1 for work on the whole.
    chunk integer NOT NULL DEFAULT -1,
    payload jsonb NOT NULL DEFAULT '{}',
    state text NOT NULL CHECK (state IN ('waiting', 'running', 'done', 'failed', 'stopped')),
    -- Raised at each claim: the number is the token without which nothing can be written.
    attempt integer NOT NULL DEFAULT 0,
    max_attempts integer NOT NULL DEFAULT 3,
    not_before timestamptz NOT NULL DEFAULT now(),
    worker_id uuid,
    heartbeat_at timestamptz,
    progress double precision NOT NULL DEFAULT 0,
    error_code text,
    error_detail text,
    started_at timestamptz,
    finished_at timestamptz,
    created_at timestamptz NOT NULL DEFAULT now(),
    updated_at timestamptz NOT NULL DEFAULT now()
  )`,
  `CREATE UNIQUE INDEX job_runs_once ON job_runs (kind, subject_id, chunk) WHERE state IN ('waiting', 'running')`,
  `CREATE INDEX job_runs_of_subject ON job_runs (subject_id, kind)`,
  `CREATE INDEX job_runs_waiting ON job_runs (not_before, created_at) WHERE state = 'waiting'`,
  `CREATE INDEX job_runs_running ON job_runs (heartbeat_at) WHERE state = 'running'`,
  `CREATE TABLE workers (
    id uuid PRIMARY KEY,
    host text NOT NULL,
    pid integer NOT NULL,
    code_version text NOT NULL,
    job_run_id uuid,
    started_at timestamptz NOT NULL DEFAULT now(),
    heartbeat_at timestamptz NOT NULL DEFAULT now(),
    stopped_at timestamptz
  )`,
];

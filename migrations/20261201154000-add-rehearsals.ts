import type { QueryInterface } from 'sequelize';

const statements = [
  // The campaign that holds the runs of rehearsals: never among those of the laboratory.
  'ALTER TABLE campaigns ADD COLUMN rehearsal boolean NOT NULL DEFAULT false',
  'CREATE UNIQUE INDEX campaigns_of_rehearsals ON campaigns (lab_id) WHERE rehearsal',
  `CREATE TABLE rehearsals (
    id uuid PRIMARY KEY,
    lab_id uuid NOT NULL REFERENCES labs,
    name text NOT NULL,
    kind text NOT NULL CHECK (kind IN ('simulated', 'planted')),
    -- tracking/rehearsal/plan.ts: the same plan always gives the same frames.
    plan jsonb NOT NULL,
    recipe_request jsonb NOT NULL,
    -- A run of its own with the planned conditions, so that ingest and analysis go the ordinary way.
    run_id uuid NOT NULL REFERENCES runs,
    -- The id that its recording gets once its frames are there; no reference, since it is given before.
    recording_id uuid NOT NULL UNIQUE,
    -- The recording in whose frames particles were planted.
    source_recording_id uuid REFERENCES recordings,
    state text NOT NULL CHECK (state IN ('waiting', 'running', 'done', 'failed', 'stopped')),
    error_code text,
    error_detail text,
    finished_at timestamptz,
    created_by uuid REFERENCES users,
    revision integer NOT NULL DEFAULT 1,
    created_at timestamptz NOT NULL DEFAULT now(),
    updated_at timestamptz NOT NULL DEFAULT now(),
    deleted_at timestamptz
  )`,
  'CREATE INDEX rehearsals_of_lab ON rehearsals (lab_id, created_at DESC)',
  // Each finished analysis of its recording is compared with the truth.
  `CREATE TABLE rehearsal_assessments (
    analysis_id uuid PRIMARY KEY REFERENCES analyses,
    rehearsal_id uuid NOT NULL REFERENCES rehearsals,
    assessment jsonb NOT NULL,
    code_version text NOT NULL,
    computed_at timestamptz NOT NULL DEFAULT now()
  )`,
  'CREATE INDEX rehearsal_assessments_of ON rehearsal_assessments (rehearsal_id, computed_at DESC)',
  // Whether a candidate is an event, where somebody can know. Kept apart from the candidates: readers must not see it.
  `CREATE TABLE candidate_truths (
    candidate_id uuid PRIMARY KEY REFERENCES candidates ON DELETE CASCADE,
    lab_id uuid NOT NULL REFERENCES labs,
    analysis_id uuid NOT NULL REFERENCES analyses,
    true_event boolean NOT NULL
  )`,
  'CREATE INDEX candidate_truths_of_lab ON candidate_truths (lab_id, analysis_id)',
  // What a person has typed and not sent yet, one draft each.
  `CREATE TABLE rehearsal_drafts (
    lab_id uuid NOT NULL REFERENCES labs,
    user_id uuid NOT NULL REFERENCES users,
    form jsonb NOT NULL,
    updated_at timestamptz NOT NULL DEFAULT now(),
    PRIMARY KEY (lab_id, user_id)
  )`,
];

export async function up({ sequelize }: QueryInterface): Promise<void> {
  for (const statement of statements) await sequelize.query(statement);
}

export async function down({ sequelize }: QueryInterface): Promise<void> {
  await sequelize.query(
    'DROP TABLE IF EXISTS rehearsal_drafts, candidate_truths, rehearsal_assessments, rehearsals',
  );
  await sequelize.query('ALTER TABLE campaigns DROP COLUMN IF EXISTS rehearsal');
}

import type { QueryInterface } from 'sequelize';

const statements = [
  // How many people must judge a candidate before it counts as judged.
  `ALTER TABLE campaigns ADD COLUMN readings smallint NOT NULL DEFAULT 1 CHECK (readings BETWEEN 1 AND 3)`,
  // Keys that a member has chosen for the review desk, by what they do.
  `ALTER TABLE memberships ADD COLUMN review_keys jsonb NOT NULL DEFAULT '{}'`,
  // A change of mind is a new row: what holds is the reader's last step.
  `CREATE TABLE verdicts (
    id uuid PRIMARY KEY,
    lab_id uuid NOT NULL REFERENCES labs,
    analysis_id uuid NOT NULL REFERENCES analyses,
    candidate_id uuid NOT NULL REFERENCES candidates,
    reader_id uuid NOT NULL REFERENCES users,
    step integer NOT NULL,
    verdict text NOT NULL CHECK (verdict IN ('yes', 'no', 'cannot-tell')),
    reason text,
    note text,
    -- Whether it was given without sight of what the others said.
    blind boolean NOT NULL,
    created_at timestamptz NOT NULL DEFAULT now(),
    UNIQUE (candidate_id, reader_id, step)
  )`,
  'CREATE INDEX verdicts_of_analysis ON verdicts (lab_id, analysis_id)',
  'CREATE INDEX verdicts_of_reader ON verdicts (lab_id, reader_id, created_at DESC)',
  `CREATE TABLE settlements (
    id uuid PRIMARY KEY,
    lab_id uuid NOT NULL REFERENCES labs,
    analysis_id uuid NOT NULL REFERENCES analyses,
    candidate_id uuid NOT NULL REFERENCES candidates,
    step integer NOT NULL,
    verdict text NOT NULL CHECK (verdict IN ('yes', 'no', 'cannot-tell')),
    reason text NOT NULL,
    settled_by uuid NOT NULL REFERENCES users,
    created_at timestamptz NOT NULL DEFAULT now(),
    UNIQUE (candidate_id, step)
  )`,
  'CREATE INDEX settlements_of_analysis ON settlements (lab_id, analysis_id)',
  `CREATE TABLE review_assignments (
    id uuid PRIMARY KEY,
    lab_id uuid NOT NULL REFERENCES labs,
    analysis_id uuid NOT NULL REFERENCES analyses,
    reader_id uuid NOT NULL REFERENCES users,
    which text NOT NULL CHECK (which IN ('all', 'accepted', 'listed')),
    -- Only of a list.
    candidate_ids uuid[],
    due_on date,
    note text,
    assigned_by uuid NOT NULL REFERENCES users,
    taken_back_at timestamptz,
    -- When the last of its candidates had been judged.
    done_at timestamptz,
    revision integer NOT NULL DEFAULT 1,
    created_at timestamptz NOT NULL DEFAULT now(),
    updated_at timestamptz NOT NULL DEFAULT now()
  )`,
  'CREATE INDEX review_assignments_of_lab ON review_assignments (lab_id, created_at DESC)',
  'CREATE INDEX review_assignments_of_reader ON review_assignments (lab_id, reader_id)',
  // What the principal investigator has been told of; without a row they have not.
  `CREATE TABLE disagreement_notices (
    candidate_id uuid PRIMARY KEY REFERENCES candidates,
    lab_id uuid NOT NULL REFERENCES labs,
    analysis_id uuid NOT NULL REFERENCES analyses,
    told_at timestamptz NOT NULL DEFAULT now()
  )`,
  // Judgements are history: rows are added, never changed or removed, whoever writes.
  `CREATE FUNCTION refuse_change_of_judgement() RETURNS trigger LANGUAGE plpgsql AS $$
    BEGIN
      RAISE EXCEPTION 'Judgements are kept: a change of mind is a new row.' USING ERRCODE = 'restrict_violation';
    END $$`,
  `CREATE TRIGGER verdicts_are_kept BEFORE UPDATE OR DELETE ON verdicts
    FOR EACH ROW EXECUTE FUNCTION refuse_change_of_judgement()`,
  `CREATE TRIGGER settlements_are_kept BEFORE UPDATE OR DELETE ON settlements
    FOR EACH ROW EXECUTE FUNCTION refuse_change_of_judgement()`,
  // The verdict that holds of each reader.
  `CREATE VIEW candidate_readings AS
    SELECT DISTINCT ON (candidate_id, reader_id) * FROM verdicts ORDER BY candidate_id, reader_id, step DESC`,
  // Where each candidate stands: open until enough people have judged it, then agreed or disagreed, unless settled.
  `CREATE VIEW candidate_outcomes AS
    SELECT c.id AS candidate_id, c.lab_id, c.analysis_id, k.readings AS needed,
      v.readers,
      CASE WHEN s.verdict IS NOT NULL THEN 'settled'
           WHEN v.readers < k.readings THEN 'open'
           WHEN v.opinions = 1 THEN 'agreed'
           ELSE 'disagreed' END AS state,
      CASE WHEN s.verdict IS NOT NULL THEN s.verdict
           WHEN v.readers >= k.readings AND v.opinions = 1 THEN v.verdict END AS verdict
    FROM candidates c
      JOIN analyses a ON a.id = c.analysis_id
      JOIN recordings g ON g.id = a.recording_id
      JOIN runs r ON r.id = g.run_id
      JOIN campaigns k ON k.id = r.campaign_id
      -- Laterals: a list of one analysis must not read the judgements of all.
      LEFT JOIN LATERAL (
        SELECT verdict FROM settlements WHERE candidate_id = c.id ORDER BY step DESC LIMIT 1
      ) s ON true
      LEFT JOIN LATERAL (
        SELECT count(*)::int AS readers, count(DISTINCT verdict)::int AS opinions, min(verdict) AS verdict
        FROM candidate_readings x WHERE x.candidate_id = c.id
      ) v ON true`,
];

export async function up({ sequelize }: QueryInterface): Promise<void> {
  for (const statement of statements) await sequelize.query(statement);
}

export async function down({ sequelize }: QueryInterface): Promise<void> {
  await sequelize.query('DROP VIEW IF EXISTS candidate_outcomes, candidate_readings');
  await sequelize.query(
    'DROP TABLE IF EXISTS disagreement_notices, review_assignments, settlements, verdicts',
  );
  await sequelize.query('DROP FUNCTION IF EXISTS refuse_change_of_judgement');
  await sequelize.query('ALTER TABLE memberships DROP COLUMN IF EXISTS review_keys');
  await sequelize.query('ALTER TABLE campaigns DROP COLUMN IF EXISTS readings');
}

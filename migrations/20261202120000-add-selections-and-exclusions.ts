import type { QueryInterface } from 'sequelize';

const statements = [
  `CREATE TABLE saved_selections (
    id uuid PRIMARY KEY,
    lab_id uuid NOT NULL REFERENCES labs,
    name text NOT NULL,
    -- Parameters of the comparison's address: what was chosen, not which runs that were.
    filters jsonb NOT NULL,
    created_by uuid REFERENCES users,
    revision integer NOT NULL DEFAULT 1,
    created_at timestamptz NOT NULL DEFAULT now(),
    updated_at timestamptz NOT NULL DEFAULT now(),
    deleted_at timestamptz
  )`,
  `CREATE UNIQUE INDEX saved_selections_by_name ON saved_selections (lab_id, lower(name)) WHERE deleted_at IS NULL`,
  `CREATE TABLE run_exclusions (
    id uuid PRIMARY KEY,
    lab_id uuid NOT NULL REFERENCES labs,
    run_id uuid NOT NULL REFERENCES runs,
    reason text NOT NULL CHECK (length(btrim(reason)) > 0),
    created_by uuid NOT NULL REFERENCES users,
    created_at timestamptz NOT NULL DEFAULT now(),
    -- Taken back, never removed: what was left out of a fit, and why, stays known.
    ended_by uuid REFERENCES users,
    ended_at timestamptz
  )`,
  'CREATE UNIQUE INDEX run_exclusions_in_force ON run_exclusions (run_id) WHERE ended_at IS NULL',
];

export async function up({ sequelize }: QueryInterface): Promise<void> {
  for (const statement of statements) await sequelize.query(statement);
}

export async function down({ sequelize }: QueryInterface): Promise<void> {
  await sequelize.query('DROP TABLE IF EXISTS run_exclusions, saved_selections');
}

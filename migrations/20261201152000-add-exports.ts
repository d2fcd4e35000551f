import type { QueryInterface } from 'sequelize';

const statements = [
  `CREATE TABLE exports (
    id uuid PRIMARY KEY,
    lab_id uuid NOT NULL REFERENCES labs,
    title text NOT NULL,
    -- Analyses, formats, figures, licence, contributors: what was asked for, with nothing left out.
    request jsonb NOT NULL,
    state text NOT NULL CHECK (state IN ('waiting', 'running', 'done', 'failed', 'stopped', 'expired')),
    stage text NOT NULL DEFAULT 'collect',
    progress double precision NOT NULL DEFAULT 0,
    file_name text,
    bytes bigint,
    sha256 text,
    error_code text,
    error_detail text,
    created_by uuid REFERENCES users,
    finished_at timestamptz,
    -- When the file of the package goes; what was in it stays known.
    expires_at timestamptz,
    revision integer NOT NULL DEFAULT 1,
    created_at timestamptz NOT NULL DEFAULT now(),
    updated_at timestamptz NOT NULL DEFAULT now()
  )`,
  'CREATE INDEX exports_of_lab ON exports (lab_id, created_at DESC)',
];

export async function up({ sequelize }: QueryInterface): Promise<void> {
  for (const statement of statements) await sequelize.query(statement);
}

export async function down({ sequelize }: QueryInterface): Promise<void> {
  await sequelize.query('DROP TABLE IF EXISTS exports');
}

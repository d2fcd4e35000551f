import type { QueryInterface } from 'sequelize';

export async function up({ sequelize }: QueryInterface): Promise<void> {
  await sequelize.query(`
    -- Where people are signed in. A session that is older than this table has no row and ends by itself within a day.
    CREATE TABLE sessions (
      id uuid PRIMARY KEY,
      user_id uuid NOT NULL REFERENCES users (id) ON DELETE CASCADE,
      -- Sessions of an earlier version of the account ended with it.
      session_version integer NOT NULL,
      agent text NOT NULL,
      created_at timestamptz NOT NULL DEFAULT now(),
      seen_at timestamptz NOT NULL DEFAULT now(),
      ended_at timestamptz
    );
    CREATE INDEX sessions_user ON sessions (user_id, created_at DESC)`);
}

export async function down({ sequelize }: QueryInterface): Promise<void> {
  await sequelize.query('DROP TABLE IF EXISTS sessions');
}

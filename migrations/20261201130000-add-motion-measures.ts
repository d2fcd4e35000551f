import type { QueryInterface } from 'sequelize';

/** Spreading, memory and tails of velocities; null for analyses that were measured before. */
export async function up({ sequelize }: QueryInterface): Promise<void> {
  await sequelize.query('ALTER TABLE analysis_measures ADD COLUMN motion jsonb');
}

export async function down({ sequelize }: QueryInterface): Promise<void> {
  await sequelize.query('ALTER TABLE analysis_measures DROP COLUMN IF EXISTS motion');
}

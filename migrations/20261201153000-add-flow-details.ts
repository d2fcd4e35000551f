import type { QueryInterface } from 'sequelize';

/** Measures over time, across the channel and beside what is expected; null for analyses from before. */
export async function up({ sequelize }: QueryInterface): Promise<void> {
  await sequelize.query('ALTER TABLE analysis_measures ADD COLUMN details jsonb');
}

export async function down({ sequelize }: QueryInterface): Promise<void> {
  await sequelize.query('ALTER TABLE analysis_measures DROP COLUMN IF EXISTS details');
}

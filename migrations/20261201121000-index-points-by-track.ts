import type { QueryInterface } from 'sequelize';

/** Tables are written track by track: without this index each piece of a download would sort all points. */
export async function up({ sequelize }: QueryInterface): Promise<void> {
  await sequelize.query(
    'CREATE INDEX track_points_of_track ON track_points (analysis_id, number, block, born_revision)',
  );
}

export async function down({ sequelize }: QueryInterface): Promise<void> {
  await sequelize.query('DROP INDEX IF EXISTS track_points_of_track');
}

import type { QueryInterface } from 'sequelize';
import { analysisTables } from './create-tables/analysis-tables';
import { peopleTables } from './create-tables/people-tables';
import { recordingTables } from './create-tables/recording-tables';
import { workTables } from './create-tables/work-tables';

const statements = [...peopleTables, ...recordingTables, ...workTables, ...analysisTables];

const tables = [
  ...['analysis_measures', 'candidates', 'track_points', 'tracks', 'spot_chunks', 'analyses', 'recipes'],
  ...['workers', 'job_runs', 'uploads', 'recordings', 'folders', 'runs', 'campaigns'],
  ...['audit_entries', 'idempotency_keys', 'rate_counters', 'api_tokens', 'memberships', 'users', 'labs'],
];

export async function up({ sequelize }: QueryInterface): Promise<void> {
  // The runner holds a transaction around every migration.
  for (const statement of statements) await sequelize.query(statement);
}

export async function down({ sequelize }: QueryInterface): Promise<void> {
  await sequelize.query(`DROP TABLE IF EXISTS ${tables.join(', ')}`);
}

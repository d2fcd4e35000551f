import type { QueryInterface } from 'sequelize';
import { sealTable } from './seal-table';

/** Parts of the flow measures of an analysis that several workers measure; gone when they are put together. */
export async function up({ sequelize }: QueryInterface): Promise<void> {
  for (const statement of [
    `CREATE TABLE flow_parts (
      analysis_id uuid NOT NULL REFERENCES analyses,
      part text NOT NULL,
      result bytea NOT NULL,
      PRIMARY KEY (analysis_id, part)
    )`,
    ...sealTable('flow_parts'),
  ]) {
    await sequelize.query(statement);
  }
}

export async function down({ sequelize }: QueryInterface): Promise<void> {
  await sequelize.query('DROP TABLE flow_parts');
}

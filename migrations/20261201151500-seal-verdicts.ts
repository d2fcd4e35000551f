import type { QueryInterface } from 'sequelize';
import { sealTable } from './seal-table';

/** What people judged of a signed-off analysis stays as it was, too. */
const JUDGEMENTS = ['verdicts', 'settlements'];

export async function up({ sequelize }: QueryInterface): Promise<void> {
  for (const statement of JUDGEMENTS.flatMap((table) => sealTable(table))) await sequelize.query(statement);
}

export async function down({ sequelize }: QueryInterface): Promise<void> {
  for (const table of JUDGEMENTS) {
    await sequelize.query(`DROP TRIGGER ${table}_sealed ON ${table}`);
    await sequelize.query(`DROP TRIGGER ${table}_sealed_whole ON ${table}`);
  }
}

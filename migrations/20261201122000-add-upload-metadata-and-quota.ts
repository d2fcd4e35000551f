import type { QueryInterface } from 'sequelize';

/** What a sender said about its file, word for word, and a bound of storage that is one laboratory's own. */
export async function up({ sequelize }: QueryInterface): Promise<void> {
  await sequelize.query('ALTER TABLE uploads ADD COLUMN metadata text');
  await sequelize.query('ALTER TABLE labs ADD COLUMN quota_bytes bigint CHECK (quota_bytes > 0)');
}

export async function down({ sequelize }: QueryInterface): Promise<void> {
  await sequelize.query('ALTER TABLE labs DROP COLUMN IF EXISTS quota_bytes');
  await sequelize.query('ALTER TABLE uploads DROP COLUMN IF EXISTS metadata');
}

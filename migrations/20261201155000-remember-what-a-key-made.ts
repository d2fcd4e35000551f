import type { QueryInterface } from 'sequelize';

export async function up({ sequelize }: QueryInterface): Promise<void> {
  // Written in the transaction that makes the thing: whoever repeats a request whose answer was lost gets that very thing.
  await sequelize.query('ALTER TABLE idempotency_keys ADD COLUMN made_id uuid');
}

export async function down({ sequelize }: QueryInterface): Promise<void> {
  await sequelize.query('ALTER TABLE idempotency_keys DROP COLUMN IF EXISTS made_id');
}

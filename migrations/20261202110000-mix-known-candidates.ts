import type { QueryInterface } from 'sequelize';

export async function up({ sequelize }: QueryInterface): Promise<void> {
  // How many candidates of rehearsals, whose truth is known, are mixed among those of an analysis for each reader.
  await sequelize.query(
    `ALTER TABLE campaigns ADD COLUMN known_candidates smallint NOT NULL DEFAULT 0
       CHECK (known_candidates BETWEEN 0 AND 20)`,
  );
}

export async function down({ sequelize }: QueryInterface): Promise<void> {
  await sequelize.query('ALTER TABLE campaigns DROP COLUMN IF EXISTS known_candidates');
}

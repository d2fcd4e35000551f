import type { QueryInterface } from 'sequelize';

const ON_TRACKS = "'split', 'join', 'trim', 'remove', 'add-point', 'move-point', 'reclass', 'undo'";

/** Lines that people mark, and frames that they call complete, stand in the log of corrections. */
export async function up({ sequelize }: QueryInterface): Promise<void> {
  await sequelize.query(
    `ALTER TABLE corrections DROP CONSTRAINT corrections_kind_check,
       ADD CONSTRAINT corrections_kind_check CHECK (kind IN (${ON_TRACKS}, 'mark-line', 'complete-frame'))`,
  );
}

export async function down({ sequelize }: QueryInterface): Promise<void> {
  await sequelize.query(
    `ALTER TABLE corrections DROP CONSTRAINT corrections_kind_check,
       ADD CONSTRAINT corrections_kind_check CHECK (kind IN (${ON_TRACKS}))`,
  );
}

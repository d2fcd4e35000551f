import { afterAll, describe, expect, it } from 'vitest';
import { connect, getSequelize } from '@/models/database';
import { cloneTemplate, dropDatabase, freshDatabase } from '../helpers/fresh-database';

const db = await freshDatabase();
afterAll(db.dropIfGreen);

describe('a fresh database', () => {
  it('has the tables of all migrations and is the database of the models', async () => {
    expect(getSequelize()).toBe(db.sequelize);
    const [rows] = await db.sequelize.query('SELECT count(*)::int AS n FROM labs');
    expect(rows).toEqual([{ n: 0 }]);
  });

  it('shares no row with another one', async () => {
    const url = await cloneTemplate();
    const other = connect(url, { max: 1 });
    await other.query('CREATE TABLE mine (n int)');
    await expect(db.sequelize.query('SELECT * FROM mine')).rejects.toThrow('"mine" does not exist');
    await other.close();
    await dropDatabase(url);
    const gone = connect(url, { max: 1 });
    await expect(gone.query('SELECT 1')).rejects.toThrow('does not exist');
    await gone.close();
  });
});

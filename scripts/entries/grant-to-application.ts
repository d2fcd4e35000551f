import { openDoorbell } from '@/jobs/doorbell';

/** Schemas of the product: its tables, and the queue that pg-boss keeps. */
const SCHEMAS = ['public', 'pgboss'];

/** Rows that are appended and read, never changed: triggers refuse it too, and rights forbid it first. */
const LOGS = ['corrections', 'verdicts', 'settlements', 'audit_entries'];

/**
 * Gives the role of web server and workers what they need: to read and write rows. It owns nothing, so that it can
 * neither empty a table, nor change one, nor switch off the triggers that keep what was signed off. Given anew after
 * every migration, for the tables that it made.
 * @param ownerUrl of the role that owns the tables
 * @param run runs a statement as that role
 */
export async function grantToApplication(
  ownerUrl: string,
  role: string,
  run: (sql: string) => Promise<unknown>,
): Promise<void> {
  // Only an owner can make the queue's tables.
  const boss = await openDoorbell(ownerUrl);
  await boss.stop({ graceful: false });
  const name = `"${role.replaceAll('"', '""')}"`;
  const schemas = SCHEMAS.join(', ');
  await run('BEGIN');
  try {
    for (const sql of [
      `REVOKE ALL ON ALL TABLES IN SCHEMA ${schemas} FROM ${name}`,
      `GRANT USAGE ON SCHEMA ${schemas} TO ${name}`,
      `GRANT SELECT, INSERT, UPDATE, DELETE ON ALL TABLES IN SCHEMA ${schemas} TO ${name}`,
      `GRANT USAGE, SELECT ON ALL SEQUENCES IN SCHEMA ${schemas} TO ${name}`,
      `GRANT EXECUTE ON ALL FUNCTIONS IN SCHEMA ${schemas} TO ${name}`,
      `REVOKE UPDATE, DELETE ON ${LOGS.join(', ')} FROM ${name}`,
      `REVOKE INSERT, UPDATE, DELETE ON schema_migrations FROM ${name}`,
    ])
      await run(sql);
    await run('COMMIT');
  } catch (error) {
    await run('ROLLBACK');
    throw error;
  }
}

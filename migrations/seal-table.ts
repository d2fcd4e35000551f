/**
 * SQL that closes a table to every change of what belongs to a signed-off analysis. `ENABLE ALWAYS` lets the
 * triggers fire also for a session that calls itself a replica. Rows lead to their analysis by `analysis_id`, or by
 * the named column of a candidate.
 */
export const sealTable = (table: string, by: 'analysis_id' | 'candidate_id' = 'analysis_id'): string[] => [
  `CREATE TRIGGER ${table}_sealed BEFORE INSERT OR UPDATE OR DELETE ON ${table}
     FOR EACH ROW EXECUTE FUNCTION refuse_after_sign_off('${by}')`,
  `CREATE TRIGGER ${table}_sealed_whole BEFORE TRUNCATE ON ${table}
     FOR EACH STATEMENT EXECUTE FUNCTION refuse_after_sign_off('${by}')`,
  `ALTER TABLE ${table} ENABLE ALWAYS TRIGGER ${table}_sealed`,
  `ALTER TABLE ${table} ENABLE ALWAYS TRIGGER ${table}_sealed_whole`,
];

import type { Transaction } from 'sequelize';
import { newId } from '@/lib/ids';
import { models } from '..';

export interface AuditNote {
  labId: string | null;
  userId: string | null;
  /** What was done, as `run.removed`. */
  action: string;
  subjectKind: string;
  subjectId?: string | null;
  detail?: Record<string, unknown>;
}

/** Writes down who did what; in the transaction that does it, where there is one. */
export async function writeAudit(note: AuditNote, transaction?: Transaction): Promise<void> {
  await models().AuditEntry.create({ id: newId(), ...note }, { transaction });
}

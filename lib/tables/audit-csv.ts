import type { AuditView } from '../views/lab-view';
import { LINE_END } from './csv-chunks';
import { textCell } from './text-cell';

export const AUDIT_COLUMNS = 'time,person,person_id,action,subject_kind,subject_id,subject,detail';

/** The audit trail as a table; `detail` is JSON. */
export async function* auditCsv(entries: AsyncIterable<AuditView>): AsyncGenerator<string> {
  yield AUDIT_COLUMNS + LINE_END;
  for await (const { createdAt, person, action, subject, detail } of entries) {
    const cells = [
      createdAt,
      textCell(person?.name ?? null),
      person?.id ?? '',
      textCell(action),
      textCell(subject.kind),
      textCell(subject.id),
      textCell(subject.name),
      textCell(Object.keys(detail).length > 0 ? JSON.stringify(detail) : null),
    ];
    yield cells.join(',') + LINE_END;
  }
}

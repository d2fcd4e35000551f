import type { Verdict } from '@/lib/review/verdict-words';
import type { ComparedRun } from '@/lib/views/compare-view';
import { agreementTable } from '@/tracking/agreement/agreement-table';
import { cohenKappa } from '@/tracking/agreement/cohen-kappa';
import { selectRows } from './select';

interface Row {
  analysis_id: string;
  candidate_id: string;
  reader_id: string;
  verdict: Verdict;
}

/**
 * Cohen's kappa of each analysis over all pairs of its readers: the last blind verdict of each on candidates that have
 * their readings, so that nothing is told of a candidate that others still judge.
 */
export async function agreementOf(
  labId: string,
  analyses: readonly string[],
): Promise<Map<string, NonNullable<ComparedRun['agreement']>>> {
  const rows = await selectRows<Row>(
    `SELECT DISTINCT ON (v.candidate_id, v.reader_id) v.analysis_id, v.candidate_id, v.reader_id, v.verdict
     FROM verdicts v JOIN candidate_outcomes o ON o.candidate_id = v.candidate_id
     WHERE v.lab_id = $1 AND v.analysis_id = ANY($2::uuid[]) AND v.blind AND o.state <> 'open'
     ORDER BY v.candidate_id, v.reader_id, v.step DESC`,
    [labId, [...analyses]],
  );
  const pairs = new Map<string, [Verdict, Verdict][]>();
  for (let from = 0; from < rows.length;) {
    let to = from;
    while (to < rows.length && rows[to].candidate_id === rows[from].candidate_id) to++;
    const own = pairs.get(rows[from].analysis_id) ?? [];
    for (let a = from; a < to; a++) for (let b = a + 1; b < to; b++) own.push([rows[a].verdict, rows[b].verdict]); // prettier-ignore
    pairs.set(rows[from].analysis_id, own);
    from = to;
  }
  const found = new Map<string, NonNullable<ComparedRun['agreement']>>();
  const known = (value: number) => (Number.isFinite(value) ? value : null);
  for (const [analysis, of] of pairs) {
    if (of.length === 0) continue;
    const { count, kappa, low, high } = cohenKappa(agreementTable(of));
    if (Number.isFinite(kappa)) found.set(analysis, { value: kappa, low: known(low), high: known(high), count }); // prettier-ignore
  }
  return found;
}

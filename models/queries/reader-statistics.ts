import type { z } from 'zod';
import type { Verdict } from '@/lib/review/verdict-words';
import type { readerListQuery } from '@/lib/schemas/review';
import type { ListView, PersonView } from '@/lib/views/common';
import type { KappaView, ReaderView } from '@/lib/views/review-view';
import { agreementTable } from '@/tracking/agreement/agreement-table';
import { cohenKappa } from '@/tracking/agreement/cohen-kappa';
import { TAKEN } from './rehearsal-mark';
import { listPage } from './list-page';
import { itemOf, type ItemRow } from './person';
import { selectRows } from './select';

interface Row extends ItemRow {
  name: string;
  judged: number;
  yes: number;
  no: number;
  cannot_tell: number;
  changed: number;
}

/** Candidates of one campaign, or of all where `$2` is null; never those of rehearsals. */
const OF_CAMPAIGN = `($2::uuid IS NULL OR v.analysis_id IN (SELECT a.id FROM analyses a
  JOIN recordings g ON g.id = a.recording_id JOIN runs r ON r.id = g.run_id WHERE r.campaign_id = $2))
  AND v.analysis_id IN (SELECT a.id FROM analyses a JOIN recordings g ON g.id = a.recording_id
    WHERE a.lab_id = v.lab_id AND ${TAKEN})`;

/**
 * How each reader judges and agrees. Between readers only verdicts count that were given blind, the last of each; and
 * only candidates that have their readings, so that the numbers tell nobody what a single verdict still open is.
 * @param onlyOf the person whose numbers alone are told; null for everybody's.
 */
export async function listReaderStatistics(
  labId: string,
  onlyOf: string | null,
  query: z.output<typeof readerListQuery>,
): Promise<ListView<ReaderView>> {
  const campaign = query.campaign ?? null;
  const where = ['m.lab_id = $1', 'n.judged > 0'];
  const bind: unknown[] = [labId, campaign];
  if (onlyOf) where.push(`u.id = $${bind.push(onlyOf)}`);
  const page = await listPage<Row>(
    {
      select: 'u.id, u.name, m.revision, m.created_at, m.updated_at, n.*',
      from: `memberships m JOIN users u ON u.id = m.user_id CROSS JOIN LATERAL (
        SELECT count(DISTINCT v.candidate_id)::int AS judged,
          count(*) FILTER (WHERE last AND verdict = 'yes')::int AS yes,
          count(*) FILTER (WHERE last AND verdict = 'no')::int AS no,
          count(*) FILTER (WHERE last AND verdict = 'cannot-tell')::int AS cannot_tell,
          count(*) FILTER (WHERE step > 1)::int AS changed
        FROM (SELECT v.*, v.step = max(v.step) OVER (PARTITION BY v.candidate_id) AS last
              FROM verdicts v WHERE v.lab_id = $1 AND v.reader_id = u.id AND ${OF_CAMPAIGN}) v) n`,
      where,
      bind,
      idColumn: 'u.id',
      sorts: { name: { by: 'lower(u.name)', type: 'text' } },
    },
    query,
  );
  const judgements = await blindJudgements(labId, campaign);
  const known = await knownTruths(labId);
  return {
    items: page.rows.map((row) => ({
      ...itemOf(row),
      reader: { id: row.id, name: row.name },
      judged: row.judged,
      yes: row.yes,
      no: row.no,
      cannotTell: row.cannot_tell,
      changed: row.changed,
      settled: againstSettled(judgements, row.id),
      known: knownOf(known, row.id, onlyOf !== null),
      others: onlyOf ? [] : withOthers(judgements, row.id),
    })),
    nextCursor: page.nextCursor,
  };
}

interface Judgement {
  candidate_id: string;
  reader: PersonView;
  verdict: Verdict;
  /** The principal investigator's word, and whose it was. */
  settled: Verdict | null;
  settled_by: string | null;
}

/** The last blind verdict of each reader on each candidate that has its readings. */
function blindJudgements(labId: string, campaign: string | null): Promise<Judgement[]> {
  return selectRows<Judgement>(
    `SELECT DISTINCT ON (v.candidate_id, v.reader_id) v.candidate_id, v.verdict, s.verdict AS settled, s.settled_by,
       json_build_object('id', u.id, 'name', u.name) AS reader
     FROM verdicts v JOIN candidate_outcomes o ON o.candidate_id = v.candidate_id JOIN users u ON u.id = v.reader_id
       LEFT JOIN LATERAL (SELECT verdict, settled_by FROM settlements
         WHERE candidate_id = v.candidate_id ORDER BY step DESC LIMIT 1) s ON true
     WHERE v.lab_id = $1 AND v.blind AND o.state <> 'open' AND ${OF_CAMPAIGN}
     ORDER BY v.candidate_id, v.reader_id, v.step DESC`,
    [labId, campaign],
  );
}

/**
 * Only what somebody else settled: a verdict on which the readers agreed rests on this reader's own, and would count
 * their agreement with themselves. What is settled is mostly what readers disagree on, so these are the hard ones.
 */
function againstSettled(judgements: readonly Judgement[], readerId: string): KappaView {
  const pairs = judgements.flatMap(({ reader, verdict, settled, settled_by }): [Verdict, Verdict][] =>
    reader.id === readerId && settled !== null && settled_by !== readerId ? [[verdict, settled]] : [],
  );
  return kappaView(pairs);
}

function withOthers(judgements: readonly Judgement[], readerId: string): ReaderView['others'] {
  const own = new Map(
    judgements.filter(({ reader }) => reader.id === readerId).map((j) => [j.candidate_id, j.verdict]),
  );
  const pairs = new Map<string, { reader: PersonView; pairs: [Verdict, Verdict][] }>();
  for (const { candidate_id, reader, verdict } of judgements) {
    const mine = own.get(candidate_id);
    if (reader.id === readerId || mine === undefined) continue;
    const entry = pairs.get(reader.id) ?? { reader, pairs: [] };
    entry.pairs.push([mine, verdict]);
    pairs.set(reader.id, entry);
  }
  return [...pairs.values()]
    .sort((a, b) => (a.reader.name < b.reader.name ? -1 : 1))
    .map((entry) => ({ reader: entry.reader, ...kappaView(entry.pairs) }));
}

const known = (value: number) => (Number.isFinite(value) ? value : null);

function kappaView(pairs: readonly [Verdict, Verdict][]): KappaView {
  const { count, observed, kappa, low, high } = cohenKappa(agreementTable(pairs));
  return { count, observed: known(observed), kappa: known(kappa), low: known(low), high: known(high) };
}

interface KnownCount {
  reader_id: string;
  is_event: boolean;
  verdict: Verdict;
  count: number;
}

/** What readers said of candidates whose truth is known: the last blind verdict of each. */
function knownTruths(labId: string): Promise<KnownCount[]> {
  return selectRows<KnownCount>(
    `SELECT reader_id, is_event, verdict, count(*)::int AS count FROM (
       SELECT DISTINCT ON (v.candidate_id, v.reader_id) v.reader_id, v.verdict, t.true_event AS is_event
       FROM verdicts v JOIN candidate_truths t ON t.candidate_id = v.candidate_id
       WHERE v.lab_id = $1 AND v.blind ORDER BY v.candidate_id, v.reader_id, v.step DESC) judged
     GROUP BY reader_id, is_event, verdict`,
    [labId],
  );
}

/** Readers are told of themselves only when so many are judged that no single answer shows. */
const KNOWN_LEAST = 10;

function knownOf(counts: readonly KnownCount[], readerId: string, oneself: boolean): ReaderView['known'] {
  const mine = counts.filter(({ reader_id }) => reader_id === readerId);
  const sum = (of: (one: KnownCount) => boolean) =>
    mine.filter(of).reduce((total, { count }) => total + count, 0);
  const judged = sum(() => true);
  if (judged === 0 || (oneself && judged < KNOWN_LEAST)) return null;
  return {
    events: sum(({ is_event }) => is_event),
    eventsYes: sum(({ is_event, verdict }) => is_event && verdict === 'yes'),
    others: sum(({ is_event }) => !is_event),
    othersNo: sum(({ is_event, verdict }) => !is_event && verdict === 'no'),
    cannotTell: sum(({ verdict }) => verdict === 'cannot-tell'),
  };
}

import { createHash, type Hash } from 'node:crypto';
import type { Transaction } from 'sequelize';
import { notFound } from '@/lib/errors';
import type { ContentHashView } from '@/lib/views/correction-view';
import { getSequelize } from '../database';
import { execute, selectRow, selectRows } from './select';

/** Named at the head of what is hashed: another form of the content would be another version. */
const FORM = 'beadline-content-1';

/** Rows fetched at once. */
const BATCH = 5_000;

interface Part {
  table: string;
  /** What of a row counts; a short text each, in a fixed form. */
  columns: string;
  /** Columns that order the rows and never repeat, which leads from page to page. */
  key: readonly string[];
}

/** Whole rows but for what is no content: when a row was touched last. */
const wholeRow = `(to_jsonb(t) - 'updated_at')::text`;

/** What an analysis consists of, in the order in which it is hashed. */
const PARTS: readonly Part[] = [
  {
    table: 'tracks',
    columns: wholeRow,
    key: ['number', 'born_revision'],
  },
  {
    table: 'track_points',
    // Points are long: their own hash stands for them.
    columns: `concat_ws(' ', t.number, t.block, t.born_revision, t.ended_revision, t.first_frame, encode(sha256(t.points), 'hex'))`,
    key: ['number', 'block', 'born_revision'],
  },
  { table: 'corrections', columns: wholeRow, key: ['seq'] },
  { table: 'analysis_measures', columns: wholeRow, key: ['tracks_revision'] },
  { table: 'candidates', columns: wholeRow, key: ['event'] },
  { table: 'verdicts', columns: wholeRow, key: ['id'] },
  { table: 'settlements', columns: wholeRow, key: ['id'] },
];

/**
 * SHA-256, hex, over a canonical form of an analysis: what it was asked to do, tracks as linked and as
 * corrected, corrections, measures, candidates, verdicts. The form: a line naming it, then for each part
 * its name on a line and each row on a line, as PostgreSQL writes jsonb (keys sorted, no blanks that
 * vary), times in UTC, numbers in their shortest form.
 */
export async function contentHash(analysisId: string, transaction: Transaction): Promise<string> {
  await execute(`SET LOCAL TIME ZONE 'UTC'`, [], transaction);
  await execute('SET LOCAL extra_float_digits = 1', [], transaction);
  const hash = createHash('sha256');
  hash.update(`${FORM}\n`);
  const head = await selectRow<{ line: string }>(
    `SELECT jsonb_build_object('id', a.id, 'recording', a.recording_id, 'stack', g.sha256, 'recipe', a.recipe,
       'conditions', a.conditions, 'imageFacts', a.image_facts, 'imageModel', encode(sha256(coalesce(a.image_model, '')), 'hex'),
       'summary', a.summary, 'spotsPerFrame', a.spots_per_frame, 'code', a.code_version)::text AS line
     FROM analyses a JOIN recordings g ON g.id = a.recording_id WHERE a.id = $1`,
    [analysisId],
    transaction,
  );
  hash.update(`${head?.line}\n`);
  for (const part of PARTS) await addPart(hash, part, analysisId, transaction);
  return hash.digest('hex');
}

async function addPart(hash: Hash, part: Part, analysisId: string, transaction: Transaction): Promise<void> {
  hash.update(`${part.table}\n`);
  const keys = part.key.map((name) => `t.${name}`);
  let after: unknown[] = [];
  for (;;) {
    const from =
      after.length > 0 ? `AND (${keys.join(', ')}) > (${after.map((_, i) => `$${i + 2}`).join(', ')})` : '';
    const rows = await selectRows<Record<string, unknown> & { line: string }>(
      `SELECT ${part.columns} AS line, ${part.key.map((name) => `t.${name} AS "key_${name}"`).join(', ')}
       FROM ${part.table} t WHERE t.analysis_id = $1 ${from}
       ORDER BY ${keys.join(', ')} LIMIT ${BATCH}`,
      [analysisId, ...after],
      transaction,
    );
    for (const { line } of rows) hash.update(`${line}\n`);
    const last = rows.at(-1);
    if (!last || rows.length < BATCH) return;
    after = part.key.map((name) => last[`key_${name}`]);
  }
}

/** The hash of the content as it is now, beside the one that was signed off. @throws LabError NOT_FOUND */
export async function contentHashView(labId: string, analysisId: string): Promise<ContentHashView> {
  return getSequelize().transaction(async (transaction) => {
    // One moment of the whole, whatever is written meanwhile.
    await execute('SET TRANSACTION ISOLATION LEVEL REPEATABLE READ, READ ONLY', [], transaction);
    const row = await selectRow<{ signed: string | null }>(
      'SELECT content_hash AS signed FROM analyses WHERE lab_id = $1 AND id = $2',
      [labId, analysisId],
      transaction,
    );
    if (!row) throw notFound('analysis');
    const now = await contentHash(analysisId, transaction);
    return { contentHash: now, signed: row.signed, same: row.signed === null ? null : row.signed === now };
  });
}

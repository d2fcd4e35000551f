import { beforeEach, describe, expect, it } from 'vitest';
import { tellOfDisagreements } from '@/jobs/tell-of-review';
import type { ListView } from '@/lib/views/common';
import type { ProblemView } from '@/lib/views/common';
import * as views from '@/lib/views/review-view';
import { selectRows } from '@/models/queries/select';
import { execute } from '@/models/queries/select';
import { getSequelize } from '@/models/database';
import { call, callJson } from '../../helpers/call-route';
import {
  analysisId,
  candidates,
  column,
  ids,
  mailsOf,
  makeSet,
  PI,
  put,
  readers,
  settle,
  test,
  reviewLab,
  type Reader,
} from '../../helpers/review-set';

reviewLab();

describe('a verdict', () => {
  beforeEach(() => makeSet(1, 2));

  it('is stored, answered with its revision, and stands in the table once all readings are in', async () => {
    expect(await column()).toEqual(['', '']);
    const given = await put(ids[0], readers[0], 'yes', 1, { note: 'clear' });
    expect(given.status).toBe(200);
    expect(given.headers.get('etag')).toBe('"2"');
    const own = views.ownVerdictSchema.parse(given.body);
    expect(own).toMatchObject({ verdict: 'yes', reason: null, note: 'clear', revision: 2, review: 'agreed' });
    expect(await column()).toEqual(['yes', '']);
    const [first] = await candidates(test.people.analyst);
    expect(first).toMatchObject({ verdict: 'yes', review: 'agreed', ownVerdict: null });
  });

  it('takes the revision that the list gives, and no other', async () => {
    const [{ revision }] = await candidates(readers[0]);
    expect((await put(ids[0], readers[0], 'yes', revision + 1)).status).toBe(412);
    const missing = await call('PUT', `/api/v1/candidates/${ids[0]}/verdict`, {
      token: readers[0].token,
      json: { verdict: 'yes' },
    });
    expect(missing.status).toBe(428);
    expect((await put(ids[0], readers[0], 'yes', revision)).status).toBe(200);
    const stale = await put(ids[0], readers[0], 'no', revision);
    expect(stale.status).toBe(412);
    expect(stale.body.current?.verdict).toBe('yes');
  });

  it('sent again after its answer was lost is not doubled', async () => {
    for (let i = 0; i < 3; i++) {
      expect((await put(ids[0], readers[0], 'no', 1, { reason: 'the spots merge' })).body.revision).toBe(2);
    }
    await Promise.all([1, 2, 3].map(() => put(ids[1], readers[0], 'yes', 1)));
    const rows = await selectRows('SELECT id FROM verdicts WHERE analysis_id = $1', [analysisId]);
    expect(rows).toHaveLength(2);
  });

  it('that is changed keeps what was said before', async () => {
    await put(ids[0], readers[0], 'no', 1, { reason: 'too few points on one side' });
    const { body } = await put(ids[0], readers[0], 'yes', 2);
    expect(body.history.map(({ verdict, reason }) => [verdict, reason])).toEqual([
      ['no', 'too few points on one side'],
      ['yes', null],
    ]);
    expect(await column()).toEqual(['yes', '']);
    // Not even the database lets go of it.
    await expect(execute('DELETE FROM verdicts WHERE analysis_id = $1', [analysisId])).rejects.toThrow(
      /kept/,
    );
    await expect(execute(`UPDATE verdicts SET verdict = 'no'`)).rejects.toThrow(/kept/);
  });

  it.each([
    [{ verdict: 'maybe' }, 'verdict must be yes, no or cannot-tell.'],
    [{}, 'verdict must be yes, no or cannot-tell.'],
    [{ verdict: 'yes', reason: 'x'.repeat(201) }, 'At most 200 characters.'],
    [{ verdict: 'yes', colour: 'red' }, "Unknown field 'colour'."],
  ])('%j is refused with a sentence and changes nothing', async (json, sentence) => {
    const { status, body } = await callJson<ProblemView>('PUT', `/api/v1/candidates/${ids[0]}/verdict`, {
      token: readers[0].token,
      headers: { 'if-match': '*' },
      json,
    });
    expect(status).toBe(422);
    expect(body.errors.map(({ message }) => message)).toEqual([sentence]);
    expect((await candidates(readers[0]))[0].ownVerdict).toBeNull();
  });

  it('is refused while the analysis is not done', async () => {
    await execute(`UPDATE analyses SET state = 'running' WHERE id = $1`, [analysisId]);
    expect((await put(ids[0], readers[0], 'yes', 1)).body.code).toBe('STATE');
  });
});

describe('a second reading', () => {
  beforeEach(() => makeSet(2, 3));

  it('is never the same person’s: their second verdict is a change of mind', async () => {
    await put(ids[0], readers[0], 'yes', 1);
    await put(ids[0], readers[0], 'no', 2);
    expect(await column()).toEqual(['', '', '']);
  });

  it('that agrees gives the verdict; one that disagrees waits for the principal investigator', async () => {
    for (const [i, second] of ['yes', 'no'].entries()) {
      await put(ids[i], readers[0], 'yes', 1);
      await put(ids[i], readers[1], second, 1);
    }
    expect(await column()).toEqual(['yes', '', '']);
    const { body } = await callJson<ListView<views.DisagreementView>>(
      'GET',
      `/api/v1/disagreements?analysis=${analysisId}`,
      PI(),
    );
    expect(body.items.map((item) => views.disagreementViewSchema.parse(item))).toMatchObject([
      { candidateId: ids[1], answers: ['no', 'yes'] },
    ]);
  });

  it('of readers at the same moment leaves both, in a state that fits them', async () => {
    await Promise.all([put(ids[0], readers[0], 'yes', 1), put(ids[0], readers[1], 'no', 1)]);
    expect((await candidates(PI()))[0].review).toBe('disagreed');
  });

  it('takes a candidate out of the queue of those who are not asked for it any more', async () => {
    const waits = async ({ token }: Reader) => {
      const { body } = await callJson('GET', `/api/v1/analyses/${analysisId}/review-queue`, { token });
      const { items } = views.reviewQueueSchema.parse(body);
      return items.filter((item) => item.waits).map(({ event }) => event);
    };
    for (const reader of readers.slice(0, 2)) await put(ids[1], reader, 'yes', 1);
    await put(ids[2], readers[0], 'yes', 1);
    expect(await waits(readers[0])).toEqual([0]);
    expect(await waits(readers[1])).toEqual([0, 2]);
    expect(await waits(readers[2])).toEqual([0, 2]);
  });
});

describe('a settlement', () => {
  beforeEach(async () => {
    await makeSet(2, 2);
    await put(ids[0], readers[0], 'yes', 1);
    await put(ids[0], readers[1], 'no', 1);
  });

  it('decides, with a reason, and a later one takes its place without forgetting it', async () => {
    expect((await settle(ids[0], 'yes', '')).status).toBe(422);
    const first = await settle(ids[0], 'yes', 'The spots part along the line.');
    expect(first.status).toBe(201);
    expect(await column()).toEqual(['yes', '']);
    const { body } = await settle(ids[0], 'no', 'Seen again with the sheet of the day after.');
    expect(views.readingsViewSchema.parse(body).settlements.map(({ verdict }) => verdict)).toEqual([
      'yes',
      'no',
    ]);
    expect(await column()).toEqual(['no', '']);
    await expect(execute('DELETE FROM settlements')).rejects.toThrow(/kept/);
  });

  it('closes the candidate to its readers', async () => {
    await settle(ids[0], 'yes', 'Why.');
    const { status, body } = await put(ids[0], readers[0], 'no', '*');
    expect([status, body.code]).toEqual([409, 'STATE']);
    expect((await candidates(readers[0]))[0]).toMatchObject({ review: 'settled', verdict: 'yes' });
  });

  it('needs somebody’s verdict before it, and is done once for one key', async () => {
    expect((await settle(ids[1], 'yes', 'Why.')).body.code).toBe('STATE');
    for (let i = 0; i < 2; i++)
      await settle(ids[0], 'yes', 'Why.', { 'idempotency-key': `settle-${analysisId}` });
    const rows = await selectRows('SELECT id FROM settlements WHERE analysis_id = $1', [analysisId]);
    expect(rows).toHaveLength(1);
  });

  it('is asked for by one mail for all disagreements that have gathered, and by no second one', async () => {
    await put(ids[1], readers[0], 'yes', 1);
    await put(ids[1], readers[1], 'no', 1);
    // The work that composes the strips tells of them at its end.
    const asked = await selectRows(`SELECT id FROM job_runs WHERE kind = 'compose-strips' AND subject_id = $1`, [analysisId]); // prettier-ignore
    expect(asked.length).toBeGreaterThan(0);
    for (let i = 0; i < 2; i++) {
      await getSequelize().transaction((transaction) => tellOfDisagreements(test.labId, analysisId, transaction)); // prettier-ignore
    }
    const settlers = await selectRows<{ user_id: string }>(
      `SELECT user_id FROM memberships WHERE lab_id = $1 AND 'principal_investigator' = ANY(roles)`,
      [test.labId],
    );
    const mails = await mailsOf('review-disagreement');
    expect(mails.map(({ user_id }) => user_id).sort()).toEqual(settlers.map(({ user_id }) => user_id).sort());
    expect(mails[0].facts.candidates).toEqual(ids.map((id, event) => ({ id, event })));
  });
});

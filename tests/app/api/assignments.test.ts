import { beforeEach, describe, expect, it } from 'vitest';
import { newId } from '@/lib/ids';
import type { ListView } from '@/lib/views/common';
import type { ProblemView } from '@/lib/views/common';
import * as views from '@/lib/views/review-view';
import { call, callJson } from '../../helpers/call-route';
import {
  analysisId,
  column,
  ids,
  mailsOf,
  makeSet,
  PI,
  put,
  readers,
  test,
  reviewLab,
} from '../../helpers/review-set';

reviewLab();

describe('an assignment', () => {
  beforeEach(() => makeSet(1, 3, (event) => ({ accepted: event < 2 })));

  const assign = (json: object) =>
    callJson<views.AssignmentView & ProblemView>('POST', '/api/v1/assignments', {
      token: test.people.experimentalist.token,
      json: { analysis: analysisId, reader: readers[0].userId, ...json },
    });

  it('is told to its reader, counts what they judge, and tells who gave it when all is done', async () => {
    const { status, body } = await assign({ which: 'accepted', dueOn: '2026-12-24' });
    expect(status).toBe(201);
    expect(views.assignmentViewSchema.parse(body)).toMatchObject({
      candidates: 2,
      judged: 0,
      dueOn: '2026-12-24',
    });
    expect((await mailsOf('review-assigned')).map(({ user_id }) => user_id)).toEqual([readers[0].userId]);
    await put(ids[0], readers[0], 'yes', 1);
    expect(await mailsOf('review-done')).toEqual([]);
    await put(ids[1], readers[0], 'no', 1);
    const [done] = await mailsOf('review-done');
    expect([done.user_id, done.facts.readerName]).toEqual([
      test.people.experimentalist.userId,
      readers[0].name,
    ]);
    const { body: list } = await callJson<ListView<views.AssignmentView>>(
      'GET',
      '/api/v1/assignments?state=done',
      {
        token: readers[0].token,
      },
    );
    expect(list.items[0]).toMatchObject({ analysisId, judged: 2 });
  });

  it.each([
    [
      { reader: 'analyst' },
      'This person may not judge candidates here. An administrator can give them the role.',
    ],
    [{ candidates: ['other'] }, 'Some of these are no candidates of this analysis.'],
    [{ which: 'listed' }, 'candidates go with which: "listed", and only with it.'],
    [{ dueOn: 'soon' }, 'dueOn must be a day like 2026-03-31.'],
  ])('%j is refused with a sentence and tells nobody', async (wish: Record<string, unknown>, sentence) => {
    const json = {
      ...wish,
      ...(wish.reader ? { reader: test.people.analyst.userId } : {}),
      ...(wish.candidates ? { candidates: [newId()] } : {}),
    };
    const { status, body } = await assign(json);
    expect([status, body.errors[0].message]).toEqual([422, sentence]);
    expect(await mailsOf('review-assigned')).toEqual([]);
  });

  it('that is taken back is no one’s any more, and what was judged stays', async () => {
    const { body } = await assign({});
    await put(ids[0], readers[0], 'yes', 1);
    const path = `/api/v1/assignments/${body.id}`;
    expect((await call('DELETE', path, { token: readers[0].token })).status).toBe(403);
    expect((await call('DELETE', path, { token: PI().token })).status).toBe(204);
    expect((await call('DELETE', path, { token: PI().token })).status).toBe(404);
    expect(await column()).toEqual(['yes', '', '']);
  });

  it('those who settle hear once that every candidate has its readings', async () => {
    for (const id of ids) await put(id, readers[0], 'yes', 1);
    await put(ids[0], readers[1], 'yes', 1);
    const ends = (await mailsOf('review-done')).filter(({ facts }) => facts.readerName === null);
    expect(ends.map(({ user_id }) => user_id)).toContain(PI().userId);
    expect(new Set(ends.map(({ user_id }) => user_id)).size).toBe(ends.length);
  });
});

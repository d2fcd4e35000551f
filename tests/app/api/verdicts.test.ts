import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { ROUTES, type RouteKey } from '@/app/api/route-table';
import { makeToken } from '@/auth/tokens';
import { closeDoorbell } from '@/jobs/doorbell';
import { tellOfDisagreements } from '@/jobs/tell-of-review';
import { grantFor, scopesOf, type Role } from '@/lib/access';
import { newId } from '@/lib/ids';
import type { CandidateView } from '@/lib/views/analysis-view';
import type { ListView, ProblemView } from '@/lib/views/common';
import * as views from '@/lib/views/review-view';
import { models } from '@/models';
import { execute, selectRows } from '@/models/queries/select';
import { cohenKappa } from '@/tracking/agreement/cohen-kappa';
import { call, callJson, webSettings } from '../../helpers/call-route';
import { makeCandidates } from '../../helpers/candidates';
import { freshDatabase, type FreshDatabase } from '../../helpers/fresh-database';
import { makeAnalysis, makeRecording, makeRun, type LabRows } from '../../helpers/lab-rows';
import { makeTestLab, type TestLab } from '../../helpers/test-lab';

interface Reader {
  userId: string;
  name: string;
  token: string;
}

let database: FreshDatabase;
let test: TestLab;
let lab: LabRows;
let readers: Reader[];
let analysisId: string;
let ids: string[];

beforeAll(async () => {
  webSettings();
  database = await freshDatabase();
  test = await makeTestLab(database.url);
  readers = [test.people.annotator, await addPerson('Second reader', ['annotator']), await addPerson('Third reader', ['annotator'])]; // prettier-ignore
});
afterAll(async ({}, suite) => {
  await closeDoorbell();
  await database.dropIfGreen({}, suite);
});

async function addPerson(name: string, roles: Role[]): Promise<Reader> {
  const userId = newId();
  await models().User.create({ id: userId, name, email: `${userId}@lab.test` });
  await models().Membership.create({ id: newId(), labId: test.labId, userId, roles });
  const { token, tokenHash, hint } = makeToken();
  const scopes = scopesOf(roles);
  await models().ApiToken.create({
    id: newId(),
    labId: test.labId,
    userId,
    name: 't',
    tokenHash,
    hint,
    scopes,
  });
  return { userId, name, token };
}

/** A campaign of its own, so that no test sees another's verdicts. */
async function makeSet(
  readings: number,
  candidates: number,
  fieldsOf?: Parameters<typeof makeCandidates>[3],
) {
  const { userId } = test.people.experimentalist;
  const campaign = await models().Campaign.create({
    id: newId(),
    labId: test.labId,
    name: 'C',
    readings,
    createdBy: userId,
  });
  lab = { labId: test.labId, userId, campaignId: campaign.id };
  const run = await makeRun(lab);
  const recording = await makeRecording(lab, { runId: run.id });
  const analysis = await makeAnalysis(lab, { recordingId: recording.id, state: 'done', stage: 'done' });
  await execute(
    `INSERT INTO analysis_measures (analysis_id, tracks_revision, populations, pdfs, estimates)
     VALUES ($1, 0, '{"pairs": {}}', '[]', '[]')`,
    [analysis.id],
  );
  analysisId = analysis.id;
  ids = await makeCandidates(lab, analysisId, candidates, fieldsOf);
}

type Answer = views.OwnVerdictView & ProblemView & { current?: views.OwnVerdictView };
const PI = () => test.people.principal_investigator;

const put = (id: string, { token }: Reader, verdict: string, revision: number | string, extra: object = {}) =>
  callJson<Answer>('PUT', `/api/v1/candidates/${id}/verdict`, {
    token,
    headers: { 'if-match': typeof revision === 'number' ? `"${revision}"` : revision },
    json: { verdict, ...extra },
  });
const settle = (id: string, verdict: string, reason: string, headers: Record<string, string> = {}) =>
  callJson<views.ReadingsView & ProblemView>('POST', `/api/v1/candidates/${id}/settlement`, {
    token: PI().token,
    headers,
    json: { verdict, reason },
  });
const candidates = async ({ token }: { token: string }) =>
  (
    await callJson<ListView<CandidateView>>('GET', `/api/v1/analyses/${analysisId}/candidates?limit=200`, {
      token,
    })
  ).body.items;
const column = async () => {
  const response = await call('GET', `/api/v1/analyses/${analysisId}/reconnections.csv`, {
    token: test.people.analyst.token,
  });
  const lines = (await response.text()).trim().split('\r\n').slice(1);
  return lines.map((line) => line.split(',').at(-1));
};
const mailsOf = (kind: string) =>
  selectRows<{ user_id: string; facts: Record<string, unknown> }>(
    `SELECT user_id, facts FROM mails WHERE kind = $1 AND facts->>'analysisId' = $2 ORDER BY created_at`,
    [kind, analysisId],
  );

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

describe('blindness', () => {
  beforeEach(() => makeSet(2, 2));

  /** Every route that an annotator may read, with the ids of this set. */
  function readable(): string[] {
    const keys = (Object.keys(ROUTES) as RouteKey[]).filter(
      (key) => key.startsWith('GET ') && grantFor(['annotator'], ROUTES[key].action) !== null,
    );
    const known: Record<string, string> = { analysisId, candidateId: ids[0], campaignId: lab.campaignId };
    return keys.flatMap((key) => {
      const path = key.slice(4).replace(/\{(\w+)\}/g, (whole, name: string) => known[name] ?? whole);
      return path.includes('{') || /film|strip|progress|audit\.csv/.test(path) ? [] : [`/api/v1${path}`];
    });
  }

  it('no route tells a reader what another said: its answers are the same for yes and for no', async () => {
    const seen: string[][] = [];
    for (const verdict of ['yes', 'no', 'cannot-tell']) {
      await makeSet(2, 2);
      await put(ids[0], readers[0], verdict, 1, { reason: 'a telling reason', note: 'a telling note' });
      const answers: string[] = [];
      expect(readable().length).toBeGreaterThan(10);
      for (const path of readable()) {
        const response = await call('GET', path, { token: readers[1].token });
        const text = await response.text();
        expect(text, path).not.toContain('a telling');
        // Ids and times differ from set to set; revisions, counts and words may not.
        answers.push(`${path} ${text}`.replace(/[0-9a-f-]{36}|\d{4}-\d\d-\d\dT[\d:.]+Z|"[\w-]{40,}"/g, '#'));
      }
      // The lists of a laboratory grow with each set: those of this one are compared.
      seen.push(answers.filter((answer) => /^\S*(#|candidates)/.test(answer)));
    }
    expect(seen[1]).toEqual(seen[0]);
    expect(seen[2]).toEqual(seen[0]);
  });

  it('a reader sees the outcome of a candidate only with their own verdict, and only when it stands', async () => {
    await put(ids[0], readers[0], 'yes', 1);
    expect((await candidates(readers[0]))[0]).toMatchObject({
      review: 'hidden',
      verdict: null,
      ownVerdict: 'yes',
    });
    expect((await candidates(readers[1]))[0]).toMatchObject({
      review: 'hidden',
      verdict: null,
      ownVerdict: null,
    });
    await put(ids[0], readers[1], 'yes', 1);
    for (const reader of readers.slice(0, 2)) {
      expect((await candidates(reader))[0]).toMatchObject({ review: 'agreed', verdict: 'yes' });
    }
    expect((await candidates(readers[2]))[0]).toMatchObject({ review: 'hidden', verdict: null });
  });

  it('readers who disagree are not told so', async () => {
    await put(ids[0], readers[0], 'yes', 1);
    const { body } = await put(ids[0], readers[1], 'no', 1);
    expect(body.review).toBe('hidden');
    expect((await candidates(test.people.analyst))[0]).toMatchObject({ review: 'disagreed', verdict: null });
  });

  it.each(['GET /candidates/{candidateId}/readings', 'GET /disagreements'] as const)(
    '%s is for others',
    (key) => {
      expect(grantFor(['annotator'], ROUTES[key].action)).toBeNull();
    },
  );

  it('the audit trail says that somebody judged, not what', async () => {
    await put(ids[0], readers[0], 'cannot-tell', 1, { note: 'a telling note' });
    const { body } = await callJson('GET', '/api/v1/audit?action=verdict', { token: PI().token });
    expect(JSON.stringify(body)).toContain(ids[0]);
    expect(JSON.stringify(body)).not.toMatch(/cannot-tell|a telling/);
  });

  it('who may settle as well as judge reads no open candidate through the readings', async () => {
    const both = await addPerson('Reads and settles', ['annotator', 'principal_investigator']);
    await put(ids[0], readers[0], 'yes', 1);
    const { body } = await callJson<views.ReadingsView>('GET', `/api/v1/candidates/${ids[0]}/readings`, both);
    expect(body.readings).toEqual([]);
  });

  it('a verdict given with sight of the outcome says so, and no statistics count it', async () => {
    const both = await addPerson('Reads and downloads', ['annotator', 'analyst']);
    for (const reader of readers.slice(0, 2)) await put(ids[0], reader, 'yes', 1);
    await put(ids[0], both, 'no', 1);
    const { body } = await callJson<views.ReadingsView>('GET', `/api/v1/candidates/${ids[0]}/readings`, PI());
    expect(body.readings.map(({ blind }) => blind)).toEqual([true, true, false]);
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
      await database.sequelize.transaction((transaction) => tellOfDisagreements(test.labId, analysisId, transaction)); // prettier-ignore
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

describe('statistics of readers', () => {
  it('are kappa of the blind verdicts, pair by pair, and against what was settled', async () => {
    const said = ['yes yes', 'yes yes', 'yes no', 'no no', 'no no', 'no yes', 'cannot-tell no', 'yes yes'];
    await makeSet(2, said.length);
    for (const [i, answers] of said.entries()) {
      const [first, second] = answers.split(' ');
      await put(ids[i], readers[0], first, 1);
      await put(ids[i], readers[1], second, 1);
    }
    await settle(ids[2], 'no', 'Why.');
    const { body } = await callJson<ListView<views.ReaderView>>('GET', `/api/v1/readers?campaign=${lab.campaignId}`, PI()); // prettier-ignore
    const rows = body.items.map((item) => views.readerViewSchema.parse(item));
    const first = rows.find(({ reader }) => reader.id === readers[0].userId)!;
    expect(first).toMatchObject({ judged: 8, yes: 4, no: 3, cannotTell: 1, changed: 0 });
    // Counted by hand from `said`: rows first reader, columns second; yes, no, cannot-tell.
    const between = cohenKappa([3, 1, 0, 1, 2, 0, 0, 1, 0]);
    expect(first.others).toMatchObject([
      { reader: { id: readers[1].userId }, count: 8, kappa: between.kappa },
    ]);
    // Agreed: yes yes yes no no; settled: no against the first's yes. Two disagreements are open.
    const settled = cohenKappa([3, 1, 0, 0, 2, 0, 0, 0, 0]);
    expect(first.settled).toMatchObject({ count: 6, kappa: settled.kappa, low: settled.low });
  });

  it('tell a reader only of themselves', async () => {
    const { body } = await callJson<ListView<views.ReaderView>>('GET', '/api/v1/readers', readers[0]);
    expect(body.items.map(({ reader, others }) => [reader.id, others])).toEqual([[readers[0].userId, []]]);
  });
});

describe('the order of a queue', () => {
  it('puts the doubtful first and does not depend on what others said', async () => {
    const q = [0.5, 0.0001, 0.11, 0.09, 0.1];
    const fields = (event: number) => ({ qValue: q[event], failed: event === 4 ? ['One.', 'Two.'] : [] });
    await makeSet(2, q.length, fields);
    const order = async () => {
      const path = `/api/v1/analyses/${analysisId}/review-queue`;
      const { body } = await callJson<views.ReviewQueueView>('GET', path, readers[1]);
      return body.items.map(({ event }) => event);
    };
    // |ln(q / 0.1)|: 0.11 and 0.09 are near, then 0.5, then 0.0001; what fails two criteria comes last.
    expect(await order()).toEqual([2, 3, 0, 1, 4]);
    await put(ids[0], readers[0], 'yes', 1);
    expect(await order()).toEqual([2, 3, 0, 1, 4]);
  });
});

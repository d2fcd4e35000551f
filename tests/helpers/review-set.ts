import { afterAll, beforeAll } from 'vitest';
import { makeToken } from '@/auth/tokens';
import { closeDoorbell } from '@/jobs/doorbell';
import { scopesOf, type Role } from '@/lib/access';
import { newId } from '@/lib/ids';
import type { CandidateView } from '@/lib/views/analysis-view';
import type { ListView, ProblemView } from '@/lib/views/common';
import type * as views from '@/lib/views/review-view';
import { models } from '@/models';
import { execute, selectRows } from '@/models/queries/select';
import { call, callJson, webSettings } from './call-route';
import { makeCandidates } from './candidates';
import { freshDatabase, type FreshDatabase } from './fresh-database';
import { makeAnalysis, makeRecording, makeRun, type LabRows } from './lab-rows';
import { makeTestLab, type TestLab } from './test-lab';

export interface Reader {
  userId: string;
  name: string;
  token: string;
}

let database: FreshDatabase;
/** The laboratory, and its three readers. */
export let test: TestLab;
export let readers: Reader[];
/** The set that is judged now, made by `makeSet`. */
export let lab: LabRows;
export let analysisId: string;
export let ids: string[];

/** A laboratory with three readers, for all tests of a file. */
export function reviewLab(): void {
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
}

export async function addPerson(name: string, roles: Role[]): Promise<Reader> {
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
export async function makeSet(
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

export type Answer = views.OwnVerdictView & ProblemView & { current?: views.OwnVerdictView };
export const PI = () => test.people.principal_investigator;

export const put = (
  id: string,
  { token }: Reader,
  verdict: string,
  revision: number | string,
  extra: object = {},
) =>
  callJson<Answer>('PUT', `/api/v1/candidates/${id}/verdict`, {
    token,
    headers: { 'if-match': typeof revision === 'number' ? `"${revision}"` : revision },
    json: { verdict, ...extra },
  });
export const settle = (id: string, verdict: string, reason: string, headers: Record<string, string> = {}) =>
  callJson<views.ReadingsView & ProblemView>('POST', `/api/v1/candidates/${id}/settlement`, {
    token: PI().token,
    headers,
    json: { verdict, reason },
  });
export const candidates = async ({ token }: { token: string }) =>
  (
    await callJson<ListView<CandidateView>>('GET', `/api/v1/analyses/${analysisId}/candidates?limit=200`, {
      token,
    })
  ).body.items;
export const column = async () => {
  const response = await call('GET', `/api/v1/analyses/${analysisId}/reconnections.csv`, {
    token: test.people.analyst.token,
  });
  const lines = (await response.text()).trim().split('\r\n').slice(1);
  return lines.map((line) => line.split(',').at(-1));
};
export const mailsOf = (kind: string) =>
  selectRows<{ user_id: string; facts: Record<string, unknown> }>(
    `SELECT user_id, facts FROM mails WHERE kind = $1 AND facts->>'analysisId' = $2 ORDER BY created_at`,
    [kind, analysisId],
  );

import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeDoorbell } from '@/jobs/doorbell';
import { newId } from '@/lib/ids';
import type { ListView, ProblemView } from '@/lib/views/common';
import type { AuditView, JobView, StorageView, WorkerView } from '@/lib/views/lab-view';
import { models } from '@/models';
import { execute, selectRow } from '@/models/queries/select';
import { addWorker } from '@/models/queries/workers';
import { writeAudit } from '@/models/queries/write-audit';
import { call, callJson, webSettings } from '../../helpers/call-route';
import { freshDatabase, type FreshDatabase } from '../../helpers/fresh-database';
import { makeAnalysis, makeRecording, type LabRows } from '../../helpers/lab-rows';
import { makeTestLab, type TestLab } from '../../helpers/test-lab';

let database: FreshDatabase;
let lab: TestLab;
let other: TestLab;
let rows: LabRows;

beforeAll(async () => {
  webSettings();
  process.env.BEADLINE_CODE_VERSION = 'test';
  database = await freshDatabase();
  lab = await makeTestLab(database.url, 'First laboratory');
  other = await makeTestLab(database.url, 'Second laboratory');
  const { userId } = lab.people.experimentalist;
  const campaign = await models().Campaign.create({
    id: newId(),
    labId: lab.labId,
    name: 'C',
    createdBy: userId,
  });
  rows = { labId: lab.labId, userId, campaignId: campaign.id };
});
afterAll(({}, suite) => database.dropIfGreen({}, suite));
afterAll(closeDoorbell);

const admin = () => lab.people.lab_administrator;
const list = async <T>(path: string, token = admin().token) =>
  (await callJson<ListView<T>>('GET', `/api/v1${path}`, { token })).body.items;

interface JobFields {
  kind: string;
  subjectId: string;
  chunk?: number;
  state: 'waiting' | 'failed' | 'stopped' | 'done' | 'running';
  attempt?: number;
}
async function job(fields: JobFields): Promise<string> {
  const failed = fields.state === 'failed' ? { errorCode: 'FAULT', errorDetail: 'Failed 3 times: no.' } : {};
  const row = await models().JobRun.create({
    id: newId(),
    labId: lab.labId,
    attempt: 3,
    ...failed,
    ...fields,
  });
  return row.id;
}
const again = (id: string, token = admin().token) =>
  callJson<ProblemView>('POST', `/api/v1/jobs/${id}/again`, { token });
const stateOf = async (id: string) => (await models().JobRun.findByPk(id))!.state;

describe('failed work that is run again', () => {
  it('goes on with its analysis where it failed: what was called off with it too, what was done not', async () => {
    const analysis = await makeAnalysis(rows, { state: 'failed', stage: 'detect-spots', errorCode: 'FAULT', errorDetail: 'No.' }); // prettier-ignore
    const of = { kind: 'detect-spots', subjectId: analysis.id };
    const failed = await job({ ...of, chunk: 1, state: 'failed' });
    const calledOff = await job({ ...of, chunk: 2, state: 'stopped' });
    const done = await job({ ...of, chunk: 0, state: 'done' });
    expect((await again(failed)).status).toBe(204);
    expect([await stateOf(failed), await stateOf(calledOff), await stateOf(done)]).toEqual(['waiting', 'waiting', 'done']); // prettier-ignore
    const row = await models().JobRun.findByPk(failed);
    // A claim raises the attempt: the number goes on, so that whoever held it before can write nothing.
    expect(row).toMatchObject({ attempt: 3, maxAttempts: 6, errorCode: null });
    await analysis.reload();
    expect(analysis).toMatchObject({
      state: 'waiting',
      errorCode: null,
      errorDetail: null,
      finishedAt: null,
    });
    const entry = await models().AuditEntry.findOne({ where: { subjectId: analysis.id } });
    expect(entry).toMatchObject({ action: 'job.run-again', userId: admin().userId });
    const twice = await again(failed);
    expect([twice.status, twice.body.detail]).toEqual([409, 'This work is waiting: only work that failed can be run again.']); // prettier-ignore
  });

  it('lets a recording whose check was given up be checked again', async () => {
    const recording = await makeRecording(rows, {
      state: 'refused',
      refusal: { code: 'CHECK_FAILED', detail: 'x' },
    });
    const id = await job({ kind: 'ingest-recording', subjectId: recording.id, state: 'failed' });
    expect((await again(id, lab.people.principal_investigator.token)).status).toBe(204);
    await recording.reload();
    expect(recording).toMatchObject({ state: 'checking', refusal: null });
  });

  it('is refused where the program has changed since: one analysis is the work of one version', async () => {
    const analysis = await makeAnalysis(rows, { state: 'failed', codeVersion: 'older' });
    const id = await job({ kind: 'link-tracks', subjectId: analysis.id, state: 'failed' });
    expect((await again(id)).body).toMatchObject({
      status: 409,
      detail: expect.stringContaining('Start a new analysis'),
    });
    expect(await stateOf(id)).toBe('failed');
  });

  it('is refused for a recording that a person has dealt with since', async () => {
    const recording = await makeRecording(rows, { state: 'ready' });
    const id = await job({ kind: 'ingest-recording', subjectId: recording.id, state: 'failed' });
    expect((await again(id)).status).toBe(409);
  });

  it('tries at once what waits for its next try', async () => {
    const subjectId = newId();
    const id = await job({ kind: 'check-files', subjectId: lab.labId, state: 'waiting' });
    await execute(`UPDATE job_runs SET not_before = now() + interval '1 hour', subject_id = $2 WHERE id = $1`, [id, lab.labId]); // prettier-ignore
    const [shown] = (await list<JobView>('/jobs?state=waiting')).filter((item) => item.id === id);
    expect(Date.parse(shown.nextAt!) - Date.now()).toBeGreaterThan(3_000_000);
    expect((await again(id)).status).toBe(204);
    const row = await selectRow<{ due: boolean }>(
      'SELECT not_before <= now() AS due FROM job_runs WHERE id = $1',
      [id],
    );
    expect([row!.due, subjectId.length]).toEqual([true, 36]);
  });

  it('of another laboratory is not there', async () => {
    const id = await job({ kind: 'check-files', subjectId: newId(), state: 'failed' });
    expect((await again(id, other.people.lab_administrator.token)).status).toBe(404);
  });
});

describe('workers', () => {
  it('are shown with their last sign of life by the clock of the database', async () => {
    const id = newId();
    await addWorker({ id, host: 'rack-2', pid: 77, codeVersion: 'v1' });
    await execute(`UPDATE workers SET heartbeat_at = now() - interval '40 seconds' WHERE id = $1`, [id]);
    const worker = (await list<WorkerView>('/workers')).find((item) => item.id === id)!;
    expect(worker).toMatchObject({ host: 'rack-2', pid: 77, codeVersion: 'v1', alive: false });
    expect(worker.silent_s >= 40 && worker.silent_s < 60).toBe(true);
  });
});

describe('storage', () => {
  it('names the quota and what was checked', async () => {
    await execute('UPDATE labs SET quota_bytes = 1000000 WHERE id = $1', [lab.labId]);
    const { body } = await callJson<StorageView>('GET', '/api/v1/storage', { token: admin().token });
    expect(body).toMatchObject({ quotaBytes: 1_000_000, checks: { checked: 0, notIntact: 0, lastAt: null } });
  });

  it('is checked when the administrator asks, once however often', async () => {
    await execute(`DELETE FROM job_runs WHERE kind = 'check-files'`);
    const ask = () => callJson<StorageView>('POST', '/api/v1/file-checks', { token: admin().token });
    const [first, second] = [await ask(), await ask()];
    expect([first.status, first.body.checks.underWay, second.status]).toEqual([202, true, 202]);
    expect(await models().JobRun.count({ where: { kind: 'check-files', labId: lab.labId } })).toBe(1);
  });
});

describe('tokens of others', () => {
  it('are revoked by the administrator at once', async () => {
    const { token } = lab.people.analyst;
    const tokens = await list<{ id: string; owner: { id: string } }>('/tokens');
    const theirs = tokens.find(({ owner }) => owner.id === lab.people.analyst.userId)!;
    expect((await call('GET', '/api/v1/me', { token })).status).toBe(200);
    expect((await call('DELETE', `/api/v1/tokens/${theirs.id}`, { token: admin().token })).status).toBe(204);
    expect((await call('GET', '/api/v1/me', { token })).status).toBe(401);
  });
});

describe('the audit trail', () => {
  const EVIL = '=HYPERLINK("http://evil.test","x"), "quoted"';

  beforeAll(async () => {
    const at = async (day: string, action: string, name: string, userId = admin().userId) => {
      await writeAudit({ labId: lab.labId, userId, action, subjectKind: 'membership', subjectId: newId(), detail: { name } }); // prettier-ignore
      await execute(`UPDATE audit_entries SET created_at = $2::timestamptz WHERE detail->>'name' = $1`, [
        name,
        day,
      ]);
    };
    await at('2026-01-31T23:59:59.999Z', 'member.removed', 'Last of January');
    await at('2026-02-01T00:00:00Z', 'member.removed', 'First of February');
    await at('2026-02-28T23:59:59.999Z', 'member.sessions-ended', 'Last of February');
    await at('2026-03-01T00:00:00Z', 'member.removed', EVIL, lab.people.principal_investigator.userId);
    await writeAudit({ labId: other.labId, userId: null, action: 'member.removed', subjectKind: 'membership', detail: { name: 'Theirs' } }); // prettier-ignore
  });
  const names = async (query: string, token?: string) =>
    (await list<AuditView>(`/audit?${query}`, token)).map(({ subject }) => subject.name);

  it('is searched by words of the act, of the person, of what it was done to', async () => {
    expect(await names('q=last+of')).toEqual(['Last of February', 'Last of January']);
    expect(await names('q=ended+the+sessions')).toEqual(['Last of February']);
    expect(await names('q=principal&action=member')).toEqual([EVIL]);
    expect(await names('q=100%25')).toEqual([]);
  });

  it('is chosen by days, both included', async () => {
    expect(await names('from=2026-02-01&to=2026-02-28')).toEqual(['Last of February', 'First of February']);
    const bad = await callJson<ProblemView>('GET', '/api/v1/audit?from=yesterday', { token: admin().token });
    expect([bad.status, bad.body.code]).toEqual([400, 'QUERY']);
  });

  it('is exported with the same choice, oldest first, as RFC 4180 without formulas', async () => {
    const path = '/api/v1/audit.csv?from=2026-01-01&to=2026-03-31';
    const response = await call('GET', path, { token: admin().token });
    expect(response.headers.get('content-disposition')).toMatch(/^attachment; filename="lab-\w+-audit\.csv"/);
    const lines = (await response.text()).split('\r\n');
    expect(lines[0]).toBe('time,person,person_id,action,subject_kind,subject_id,subject,detail');
    expect(lines.slice(1, -1).map((line) => line.slice(0, 24))).toEqual([
      '2026-01-31T23:59:59.999Z',
      '2026-02-01T00:00:00.000Z',
      '2026-02-28T23:59:59.999Z',
      '2026-03-01T00:00:00.000Z',
    ]);
    expect(lines[4]).toContain(`,"'=HYPERLINK(""http://evil.test"",""x""), ""quoted""",`);
    expect(lines.join()).not.toContain('Theirs');
  });

  it('is exported whole, however long it is and however close together its times', async () => {
    await execute(
      `INSERT INTO audit_entries (id, lab_id, user_id, action, subject_kind, created_at)
       SELECT gen_random_uuid(), $1, $2, 'run.removed', 'run', '2025-05-05T10:00:00Z'::timestamptz + (n / 3) * interval '1 microsecond'
       FROM generate_series(1, 2500) n`,
      [lab.labId, admin().userId],
    );
    const response = await call('GET', '/api/v1/audit.csv?from=2025-05-05&to=2025-05-05', {
      token: admin().token,
    });
    expect((await response.text()).split('\r\n')).toHaveLength(2500 + 2);
  });

  it('of one’s own is all that others export', async () => {
    const { token } = lab.people.annotator;
    const text = await (await call('GET', '/api/v1/audit.csv', { token })).text();
    expect(text.split('\r\n')).toHaveLength(2);
  });
});

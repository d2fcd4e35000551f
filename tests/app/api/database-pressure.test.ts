import type { Socket } from 'node:net';
import type pg from 'pg';
import { DatabaseError } from 'sequelize';
import { afterAll, afterEach, beforeAll, describe, expect, it, vi } from 'vitest';
import { once } from '@/auth/idempotency';
import { closeDoorbell } from '@/jobs/doorbell';
import { newId } from '@/lib/ids';
import type { AnalysisView } from '@/lib/views/analysis-view';
import type { CampaignView } from '@/lib/views/campaign-view';
import type { ListView, ProblemView } from '@/lib/views/common';
import { getSequelize } from '@/models/database';
import { isDatabaseAway, untilDatabaseIsBack } from '@/models/database-away';
import { models } from '@/models';
import { withRawClient } from '@/models/raw-client';
import { withRetries } from '@/models/with-retries';
import { callJson, webSettings } from '../../helpers/call-route';
import { freshDatabase, type FreshDatabase } from '../../helpers/fresh-database';
import { makeRecording } from '../../helpers/lab-rows';
import { makeTestLab, type LabPerson } from '../../helpers/test-lab';

/** The line below the driver, which its types don't show. */
const streamOf = (client: pg.Client) =>
  (client as unknown as { connection: { stream: Socket } }).connection.stream;

let database: FreshDatabase;
let person: LabPerson;
let administrator: LabPerson;
let labId: string;

beforeAll(async () => {
  webSettings();
  database = await freshDatabase();
  const lab = await makeTestLab(database.url);
  ({ labId } = lab);
  person = lab.people.experimentalist;
  administrator = lab.people.lab_administrator;
});
afterEach(() => vi.useRealTimers());
afterAll(async ({}, suite) => {
  await closeDoorbell();
  await database.dropIfGreen({}, suite);
});

const makeCampaign = (name: string) =>
  models().Campaign.create({ id: newId(), labId, name, createdBy: person.userId });

describe('a database under pressure', () => {
  it('F11 with every connection in use the answer is 503 with a sentence and a time, and good once one is free', async () => {
    const ask = () => callJson<ProblemView>('GET', '/api/v1/campaigns', { token: person.token });
    const { maxSize } = (getSequelize().connectionManager as unknown as { pool: { maxSize: number } }).pool;
    let release = () => undefined as void;
    const held = new Promise<void>((resolve) => (release = resolve));
    const holders = Array.from({ length: maxSize }, () => getSequelize().transaction(() => held));
    const busy = await ask();
    expect([busy.status, busy.body.code, busy.body.detail, busy.headers.get('retry-after')]).toEqual([
      503,
      'BUSY',
      'The server is busy. Try again in a moment.',
      '5',
    ]);
    release();
    await Promise.all(holders);
    expect((await ask()).status).toBe(200);
  });

  it('F12 of two changes that lock the same rows crosswise both are made, and nobody is told', async () => {
    const [a, b] = [await makeCampaign('A'), await makeCampaign('B')];
    let met = 0;
    let tries = 0;
    const cross = (first: string, second: string) =>
      withRetries(() =>
        getSequelize().transaction(async (transaction) => {
          tries += 1;
          const add = (id: string) =>
            getSequelize().query(`UPDATE campaigns SET name = name || '+' WHERE id = $1`, {
              bind: [id],
              transaction,
            });
          await add(first);
          met += 1;
          // Both hold their first row before either asks for its second.
          while (met < 2) await new Promise((resolve) => setTimeout(resolve, 5));
          await add(second);
        }),
      );
    await Promise.all([cross(a.id, b.id), cross(b.id, a.id)]);
    expect(tries).toBe(3);
    expect([(await a.reload()).name, (await b.reload()).name]).toEqual(['A++', 'B++']);
  });

  it('F26 a clock that jumps back does not change the order of what was done', async () => {
    const campaign = await makeCampaign('Clock');
    const rename = (revision: number, name: string) =>
      callJson<CampaignView>('PATCH', `/api/v1/campaigns/${campaign.id}`, {
        token: person.token,
        json: { name },
        headers: { 'if-match': `"${revision}"` },
      });
    expect((await rename(1, 'before')).status).toBe(200);
    vi.useFakeTimers({ now: Date.now() - 3_600_000, toFake: ['Date'] });
    expect((await rename(2, 'after')).status).toBe(200);
    vi.useRealTimers();
    const { body } = await callJson<ListView<{ action: string; createdAt: string; detail?: unknown }>>(
      'GET',
      `/api/v1/audit?action=campaign.changed`,
      { token: administrator.token },
    );
    expect(body.items).toHaveLength(2);
    const rows = await models().AuditEntry.findAll({
      where: { labId, action: 'campaign.changed' },
      order: [['createdAt', 'ASC']],
    });
    expect(rows[1].createdAt.getTime()).toBeGreaterThanOrEqual(rows[0].createdAt.getTime());
    // Ids are made by the clock of this process, and never go back with it either.
    expect(rows[1].id > rows[0].id).toBe(true);
  });
});

describe('F19 an analysis that is asked for again under the same key', () => {
  const start = (recordingId: string, key: string) =>
    callJson<AnalysisView>('POST', `/api/v1/recordings/${recordingId}/analyses`, {
      token: person.token,
      json: { recipe: {} },
      headers: { 'idempotency-key': key },
    });
  const made = async () => {
    const campaign = await makeCampaign('Twice');
    return makeRecording({ labId, userId: person.userId, campaignId: campaign.id });
  };

  it('is the first one, also when the process died before it could answer', async () => {
    const recording = await made();
    const key = newId();
    const first = await start(recording.id, key);
    expect(first.status).toBe(201);
    // As the crash leaves it: what was made is known, the answer is not.
    await getSequelize().query('UPDATE idempotency_keys SET status = NULL, body = NULL WHERE key = $1', {
      bind: [key],
    });
    const again = await start(recording.id, key);
    expect([again.status, again.body.id]).toEqual([201, first.body.id]);
    expect(await models().Analysis.count({ where: { recordingId: recording.id } })).toBe(1);
    expect(await models().JobRun.count({ where: { subjectId: first.body.id } })).toBe(1);
  });

  it('is made anew when the first attempt made nothing', async () => {
    const viewer = { userId: person.userId, labId } as Parameters<typeof once>[0];
    const key = newId();
    const failing = once(viewer, key, 'x', async (request) => {
      await getSequelize()
        .transaction(async (transaction) => {
          await request.remember(newId(), transaction);
          throw new Error('rolled back');
        })
        .catch(() => undefined);
      throw new Error('nothing was made');
    });
    await expect(failing).rejects.toThrow('nothing was made');
    const second = await once(viewer, key, 'x', async ({ madeBefore }) => ({
      status: 201,
      body: madeBefore,
    }));
    expect(second).toEqual({ status: 201, body: null, replayed: false });
  });
});

describe('a database that is away', () => {
  it('is told from any other failure', async () => {
    const broken = await getSequelize()
      .query('SELECT nonsense')
      .catch((cause: unknown) => cause);
    expect(isDatabaseAway(broken)).toBe(false);
    const cut = await getSequelize()
      .query('SELECT pg_terminate_backend(pg_backend_pid())')
      .catch((cause: unknown) => cause);
    expect(isDatabaseAway(cut)).toBe(true);
    expect(isDatabaseAway({ original: { code: '57P03' } })).toBe(true);
    expect(isDatabaseAway({ original: { code: '53100' } })).toBe(true);
    const reset = Object.assign(new Error('read ECONNRESET'), { code: 'ECONNRESET', sql: '' });
    expect(isDatabaseAway(new DatabaseError(reset))).toBe(true);
    // The same words of a sender who has gone.
    expect(isDatabaseAway(reset)).toBe(false);
    expect(isDatabaseAway({ code: '23505' })).toBe(false);
    expect(isDatabaseAway(null)).toBe(false);
  });

  it('is told as well when the connection is cut under a question to the bare driver', async () => {
    const cut = await withRawClient(async (client) => {
      const question = client.query('SELECT pg_sleep(30)');
      const reset = Object.assign(new Error('read ECONNRESET'), { code: 'ECONNRESET' });
      setTimeout(() => streamOf(client).destroy(reset), 50);
      return question;
    }).catch((cause: unknown) => cause);
    expect(isDatabaseAway(cut)).toBe(true);
    const wrong = await withRawClient((client) => client.query('SELECT nonsense')).catch(
      (cause: unknown) => cause,
    );
    expect(isDatabaseAway(wrong)).toBe(false);
  });

  it('is waited for as long as it was said, and other failures are not', async () => {
    let tries = 0;
    const away = () => {
      tries += 1;
      if (tries < 3) throw Object.assign(new Error('starting up'), { code: '57P03' });
      return Promise.resolve('back');
    };
    expect(await untilDatabaseIsBack(async () => away(), 10_000)).toBe('back');
    tries = 0;
    await expect(untilDatabaseIsBack(async () => away(), 0)).rejects.toThrow('starting up');
    await expect(untilDatabaseIsBack(async () => Promise.reject(new Error('no')), 10_000)).rejects.toThrow(
      'no',
    );
  });
});

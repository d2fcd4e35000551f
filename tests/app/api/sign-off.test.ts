import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { newId } from '@/lib/ids';
import type { AnalysisView } from '@/lib/views/analysis-view';
import type { ProblemView } from '@/lib/views/common';
import type { ContentHashView, CorrectionsStored } from '@/lib/views/correction-view';
import { models } from '@/models';
import { callJson, webSettings } from '../../helpers/call-route';
import { makeDoneAnalysis, remeasureNow } from '../../helpers/corrected-analysis';
import { freshDatabase, type FreshDatabase } from '../../helpers/fresh-database';
import { applicationUrlOf } from '@/scripts/platform/test-cluster.mjs';
import { connect } from '@/models/database';
import { makeTestLab, type TestLab } from '../../helpers/test-lab';

let database: FreshDatabase;
let lab: TestLab;
let made: Awaited<ReturnType<typeof makeDoneAnalysis>>;

beforeAll(async () => {
  webSettings();
  database = await freshDatabase();
  lab = await makeTestLab(database.url);
  made = await makeDoneAnalysis(lab);
});
afterAll(({}, suite) => database.dropIfGreen({}, suite));

const token = (role: keyof TestLab['people']) => lab.people[role].token;
const get = async <T>(below = '') =>
  (await callJson<T>('GET', made.path + below, { token: token('annotator') })).body;
const sign = (revision: number, who: keyof TestLab['people'] = 'principal_investigator') =>
  callJson<AnalysisView & ProblemView>('POST', `${made.path}/sign-off`, {
    token: token(who),
    headers: { 'if-match': `"${revision}"` },
  });
const correct = (json: unknown, revision: number) =>
  callJson<CorrectionsStored & ProblemView>('POST', `${made.path}/corrections`, {
    token: token('annotator'),
    json,
    headers: { 'if-match': `"${revision}"` },
  });

/** By the role that owns the tables. */
const sql = (statement: string, by = database.sequelize) =>
  by.query(statement.replaceAll(':id', `'${made.analysisId}'`)).then(
    () => 'done',
    (error: { original?: { code?: string } }) => error.original?.code,
  );

describe('before', () => {
  it('the content has a hash that changes with what is corrected, and comes back with it', async () => {
    const first = await get<ContentHashView>('/content-hash');
    expect(first).toMatchObject({
      contentHash: expect.stringMatching(/^[0-9a-f]{64}$/),
      signed: null,
      same: null,
    });
    expect(await get<ContentHashView>('/content-hash')).toEqual(first);
    await correct({ kind: 'remove', track: 3 }, 0);
    expect((await get<ContentHashView>('/content-hash')).contentHash).not.toBe(first.contentHash);
  });

  it('nobody but a principal investigator signs off, and only results that fit and were seen', async () => {
    const { revision } = await get<AnalysisView>();
    expect((await sign(revision, 'annotator')).status).toBe(403);
    expect((await sign(revision - 1)).status).toBe(412);
    const early = await sign(revision);
    expect([early.status, early.body.detail]).toEqual([
      409,
      'Tracks were corrected and results are being measured again: sign off when they are there.',
    ]);
  });

  it('a log is never rewritten', async () => {
    expect(await sql('UPDATE corrections SET kind = kind WHERE analysis_id = :id')).toBe('BL002');
    expect(await sql('DELETE FROM corrections WHERE analysis_id = :id')).toBe('BL002');
    expect(await sql('TRUNCATE corrections')).toBe('BL002');
  });
});

describe('after a sign-off', () => {
  beforeAll(async () => {
    await remeasureNow(lab.labId, made.analysisId);
    const { revision } = await get<AnalysisView>();
    const { status, body } = await sign(revision);
    expect(status).toBe(200);
    expect(body.signedOff).toMatchObject({ by: { name: lab.people.principal_investigator.name } });
  });

  it('the hash that was signed is the hash of what is there', async () => {
    const { signedOff } = await get<AnalysisView>();
    const now = await get<ContentHashView>('/content-hash');
    expect(now).toEqual({ contentHash: signedOff!.contentHash, signed: signedOff!.contentHash, same: true });
  });

  it('no correction gets through, nor a second sign-off', async () => {
    const { status, body } = await correct({ kind: 'remove', track: 4 }, 1);
    expect(status).toBe(409);
    expect(body.detail).toMatch(
      /^This analysis was signed off by Test principal investigator on \d{4}-\d\d-\d\d: it can't be changed any more\.$/,
    );
    const { revision } = await get<AnalysisView>();
    expect((await sign(revision)).status).toBe(409);
    expect(await get<AnalysisView>()).toMatchObject({ revision, correctionsRevision: 1 });
  });

  it.each([
    `INSERT INTO corrections (id, lab_id, analysis_id, seq, kind, fields, created_by)
       SELECT gen_random_uuid(), lab_id, id, 2, 'remove', '{"track": 4}', signed_off_by FROM analyses WHERE id = :id`,
    'UPDATE tracks SET population = 0 WHERE analysis_id = :id',
    'DELETE FROM tracks WHERE analysis_id = :id',
    `UPDATE track_points SET points = '' WHERE analysis_id = :id`,
    'DELETE FROM track_points WHERE analysis_id = :id',
    `UPDATE analysis_measures SET estimates = '[]' WHERE analysis_id = :id`,
    'DELETE FROM analysis_measures WHERE analysis_id = :id',
    'UPDATE candidates SET accepted = NOT accepted WHERE analysis_id = :id',
    'DELETE FROM candidates WHERE analysis_id = :id',
    `INSERT INTO verdicts (id, lab_id, analysis_id, candidate_id, reader_id, step, verdict, blind)
       SELECT gen_random_uuid(), a.lab_id, a.id, c.id, a.signed_off_by, 1, 'yes', true
       FROM analyses a JOIN candidates c ON c.analysis_id = a.id WHERE a.id = :id`,
    `INSERT INTO settlements (id, lab_id, analysis_id, candidate_id, settled_by, step, verdict, reason)
       SELECT gen_random_uuid(), a.lab_id, a.id, c.id, a.signed_off_by, 1, 'yes', 'late'
       FROM analyses a JOIN candidates c ON c.analysis_id = a.id WHERE a.id = :id`,
    'TRUNCATE verdicts',
    'UPDATE analyses SET signed_off_at = NULL, content_hash = NULL WHERE id = :id',
    `UPDATE analyses SET recipe = '{}' WHERE id = :id`,
    'DELETE FROM analyses WHERE id = :id',
    'TRUNCATE tracks',
    'TRUNCATE track_points',
    'TRUNCATE analysis_measures',
    'TRUNCATE candidates CASCADE',
    'TRUNCATE analyses CASCADE',
  ])('the database refuses %s', async (statement) => {
    expect(await sql(statement)).toBe('BL001');
  });

  it('a row can be moved neither out of it nor into it', async () => {
    const other = await models().Analysis.create({
      ...(await models().Analysis.findByPk(made.analysisId))!.get({ plain: true }),
      id: newId(),
      signedOffAt: null,
      signedOffBy: null,
      contentHash: null,
    });
    expect(await sql(`UPDATE candidates SET analysis_id = '${other.id}' WHERE analysis_id = :id`)).toBe(
      'BL001',
    );
    await database.sequelize.query(
      `INSERT INTO spot_chunks (analysis_id, chunk, first_frame, frames, spot_count, spots_per_frame, spots)
       VALUES ('${other.id}', 0, 0, 1, 0, '{0}', '')`,
    );
    expect(await sql(`UPDATE spot_chunks SET analysis_id = :id WHERE analysis_id = '${other.id}'`)).toBe(
      'BL001',
    );
  });
});

describe('web server and workers, by the role that they have', () => {
  let application: ReturnType<typeof connect>;
  beforeAll(() => {
    application = connect(applicationUrlOf(database.url), { max: 1 });
  });
  afterAll(() => application.close());
  /** PostgreSQL's code for a right that the role does not have. */
  const FORBIDDEN = '42501';

  it('read and write rows of what is open', async () => {
    expect(await sql('SELECT count(*) FROM tracks WHERE analysis_id = :id', application)).toBe('done');
    expect(await sql(`UPDATE labs SET name = name`, application)).toBe('done');
    expect(await sql('SELECT count(*) FROM pgboss.job', application)).toBe('done');
  });

  it.each([
    'UPDATE tracks SET population = 0 WHERE analysis_id = :id',
    'DELETE FROM candidates WHERE analysis_id = :id',
    'UPDATE analyses SET signed_off_at = NULL, content_hash = NULL WHERE id = :id',
  ])('are refused what changes a sign-off: %s', async (statement) => {
    expect(await sql(statement, application)).toBe('BL001');
  });

  it.each([
    'TRUNCATE tracks',
    'TRUNCATE analyses CASCADE',
    'ALTER TABLE tracks DISABLE TRIGGER tracks_sealed',
    'ALTER TABLE analyses DISABLE TRIGGER ALL',
    'DROP TRIGGER analyses_sealed ON analyses',
    'DROP TABLE track_points',
    `CREATE OR REPLACE FUNCTION refuse_change_of_signed() RETURNS trigger LANGUAGE plpgsql AS $$ BEGIN RETURN NEW; END $$`,
    'DROP FUNCTION refuse_after_sign_off CASCADE',
    `SET session_replication_role = 'replica'`,
    'SET ROLE beadline',
    'CREATE TABLE mine (id int)',
    'UPDATE corrections SET kind = kind',
    'DELETE FROM verdicts',
    'UPDATE settlements SET reason = reason',
    'DELETE FROM audit_entries',
    'DELETE FROM schema_migrations',
  ])('have no right to %s', async (statement) => {
    expect(await sql(statement, application)).toBe(FORBIDDEN);
  });
});

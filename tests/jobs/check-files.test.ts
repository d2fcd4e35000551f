import { createHash } from 'node:crypto';
import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { askForFileCheck, askForNightlyChecks } from '@/jobs/check-files';
import { closeDoorbell } from '@/jobs/doorbell';
import { HANDLERS } from '@/jobs/registry';
import { folderFile, stackFile, stackFolder } from '@/jobs/stack-folder';
import { startWorker } from '@/jobs/worker';
import { newId } from '@/lib/ids';
import { models } from '@/models';
import type { Recording } from '@/models/recording';
import { fileCheckSummary, recordingsToCheck } from '@/models/queries/file-checks';
import { getRecording } from '@/models/queries/recordings';
import { execute, selectRows } from '@/models/queries/select';
import { freshDatabase, type FreshDatabase } from '../helpers/fresh-database';
import { makeLab, makeRecording, type LabRows } from '../helpers/lab-rows';
import { until } from '../helpers/until';

let db: FreshDatabase;
let lab: LabRows;

beforeAll(async () => {
  db = await freshDatabase();
  process.env.BEADLINE_DATA = mkdtempSync(join(process.env.TEST_FOLDER ?? tmpdir(), 'files-'));
});
beforeEach(async () => {
  lab = await makeLab();
});
afterAll(({}, suite) => db.dropIfGreen({}, suite));
afterAll(closeDoorbell);

const sha256 = (bytes: Buffer | string) => createHash('sha256').update(bytes).digest('hex');

async function stored(name: string, bytes = Buffer.from(`stack ${name}`)): Promise<Recording> {
  const recording = await makeRecording(lab, { name, bytes: String(bytes.length), sha256: sha256(bytes) });
  mkdirSync(stackFolder(recording.id), { recursive: true });
  writeFileSync(stackFile(recording.id), bytes);
  return recording;
}

async function check(sampleBytes = 1e9): Promise<void> {
  const id = await db.sequelize.transaction((transaction) =>
    askForFileCheck(lab.labId, sampleBytes, transaction),
  );
  const worker = await startWorker({
    handlers: HANDLERS,
    say: () => undefined,
    times: { pollMs: 20, sweepMs: 50 },
  });
  try {
    await until(async () => (await models().JobRun.findByPk(id!))!.state, (state) => state === 'done'); // prettier-ignore
  } finally {
    await worker.stop();
  }
}

const stateOf = async ({ id }: Recording) =>
  (await selectRows<{ state: string }>('SELECT state FROM file_checks WHERE recording_id = $1', [id]))[0]
    ?.state;
const damageOf = async (id: string) => (await getRecording(lab.labId, id)).damage;
const alarms = () =>
  selectRows<{ user_id: string; facts: { recordings: string[] } }>(
    `SELECT user_id, facts FROM mails WHERE lab_id = $1 AND kind = 'files-damaged' ORDER BY created_at`,
    [lab.labId],
  );
const audit = async () =>
  (await models().AuditEntry.findAll({ where: { labId: lab.labId }, order: [['createdAt', 'ASC']] })).map(
    ({ action, subjectId }) => [action, subjectId],
  );

describe('the check of stored files', () => {
  it('sees a flipped bit and a lost file, and leaves good ones alone', async () => {
    const [good, flipped, lost] = [await stored('good'), await stored('flipped'), await stored('lost')];
    await models().Membership.update({ roles: ['lab_administrator'] }, { where: { labId: lab.labId } });
    await check();
    expect(await fileCheckSummary(lab.labId)).toMatchObject({
      checked: 3,
      unchecked: 0,
      notIntact: 0,
      underWay: false,
    });
    const bytes = Buffer.from('stack flipped');
    bytes[3] ^= 1;
    writeFileSync(stackFile(flipped.id), bytes);
    rmSync(stackFile(lost.id));
    await check();
    expect([await stateOf(good), await stateOf(flipped), await stateOf(lost)]).toEqual([
      'intact',
      'damaged',
      'missing',
    ]);
    expect((await damageOf(flipped.id))!.detail).toBe(
      `SHA-256 is ${sha256(bytes).slice(0, 12)}.., at arrival it was ${sha256('stack flipped').slice(0, 12)}...`,
    );
    expect(await damageOf(good.id)).toBeNull();
    const [alarm, ...more] = await alarms();
    expect([alarm.user_id, [...alarm.facts.recordings].sort(), more]).toEqual([
      lab.userId,
      ['flipped', 'lost'],
      [],
    ]);
    expect((await audit()).sort()).toEqual([['files.damaged', flipped.id], ['files.damaged', lost.id]].sort()); // prettier-ignore
  });

  it('raises the alarm once, keeps the moment at which the damage was first seen, and tells of the repair', async () => {
    const recording = await stored('once');
    await models().Membership.update({ roles: ['lab_administrator'] }, { where: { labId: lab.labId } });
    writeFileSync(stackFile(recording.id), 'other bytes');
    await check();
    const first = await damageOf(recording.id);
    await check();
    expect((await damageOf(recording.id))!.since).toEqual(first!.since);
    expect(await alarms()).toHaveLength(1);
    writeFileSync(stackFile(recording.id), 'stack once');
    await check();
    expect(await damageOf(recording.id)).toBeNull();
    expect((await audit()).map(([action]) => action)).toEqual(['files.damaged', 'files.restored']);
  });

  it('reads a folder of frames by the list of its files', async () => {
    const frames = [['f2.png', 'two'], ['f10.png', 'ten']]; // prettier-ignore
    // As at arrival: `<sha256>  <name>` lines in natural order of the names.
    const manifest = frames.map(([name, text]) => `${sha256(text)}  ${name}\n`).join('');
    const recording = await makeRecording(lab, { kind: 'folder', sha256: sha256(manifest), bytes: '6' });
    mkdirSync(join(stackFolder(recording.id), 'files'), { recursive: true });
    for (const [position, [filename, text]] of frames.entries()) {
      await models().Upload.create({ id: newId(), labId: lab.labId, userId: lab.userId, runId: recording.runId, recordingId: recording.id, position, filename, bytes: '3', state: 'finished' }); // prettier-ignore
      writeFileSync(folderFile(recording.id, position), text);
    }
    await check();
    expect(await stateOf(recording)).toBe('intact');
    writeFileSync(folderFile(recording.id, 1), 'tin');
    await check();
    expect(await stateOf(recording)).toBe('damaged');
  });

  it('takes what was looked at longest ago first, so that all get their turn', async () => {
    const names = ['a', 'b', 'c', 'd', 'e'];
    for (const name of names) await stored(name, Buffer.alloc(100));
    const turns: string[][] = [];
    for (let night = 0; night < 3; night++) {
      const sample = await recordingsToCheck(lab.labId, 200);
      turns.push(sample.map(({ name }) => name));
      await check(200);
    }
    expect(turns).toEqual([['a', 'b'], ['c', 'd'], ['e', 'a']]); // prettier-ignore
  });

  it('looks at one recording at least, however large it is', async () => {
    await stored('large', Buffer.alloc(5000));
    expect(await recordingsToCheck(lab.labId, 1)).toHaveLength(1);
  });
});

describe('the night', () => {
  const jobs = () => models().JobRun.count({ where: { kind: 'check-files', labId: lab.labId } });
  const at = (hour: number) => new Date(2026, 4, 5, hour, 30);

  it('brings one check to each laboratory that has recordings, and the day none to those that had one', async () => {
    await stored('x');
    await askForNightlyChecks(at(2), 1e9);
    await askForNightlyChecks(at(3), 1e9);
    expect(await jobs()).toBe(1);
    await execute(
      `UPDATE job_runs SET state = 'done', created_at = now() - interval '30 hours' WHERE kind = 'check-files'`,
    );
    await askForNightlyChecks(at(14), 1e9);
    expect(await jobs()).toBe(1);
    await askForNightlyChecks(at(2), 1e9);
    expect(await jobs()).toBe(2);
    const bare = await makeLab('Bare');
    await askForNightlyChecks(at(2), 1e9);
    expect(await models().JobRun.count({ where: { labId: bare.labId } })).toBe(0);
  });

  it('that a server always sleeps through is made up for by day', async () => {
    await stored('y');
    await askForNightlyChecks(at(2), 1e9);
    await execute(
      `UPDATE job_runs SET state = 'done', created_at = now() - interval '80 hours' WHERE lab_id = $1`,
      [lab.labId],
    );
    await askForNightlyChecks(at(14), 1e9);
    expect(await jobs()).toBe(2);
  });
});

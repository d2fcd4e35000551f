import { afterAll, beforeAll, beforeEach, expect, test } from 'vitest';
import { closeDoorbell } from '@/jobs/doorbell';
import { commitClaim } from '@/jobs/job-context';
import { reapSilent } from '@/jobs/reap-silent';
import { newId } from '@/lib/ids';
import { models } from '@/models';
import type { Analysis } from '@/models/analysis';
import { claimNextJob, LostClaimError, renewClaim, type JobClaim } from '@/models/queries/job-claims';
import { saveSpotChunk } from '@/models/queries/spot-chunks';
import { askForFakeWork, fakeHandlers, jobRow } from '../helpers/fake-work';
import { freshDatabase, type FreshDatabase } from '../helpers/fresh-database';
import { makeAnalysis, makeLab } from '../helpers/lab-rows';

let db: FreshDatabase;
let analysis: Analysis;
let jobId: string;
const quiet = () => undefined;
const handlers = fakeHandlers(async () => undefined);
const SILENCE_MS = 20_000;

beforeAll(async () => {
  db = await freshDatabase();
});
beforeEach(async () => {
  await db.sequelize.query('DELETE FROM job_runs');
  analysis = await makeAnalysis(await makeLab());
  jobId = await askForFakeWork(analysis);
});
afterAll(({}, suite) => db.dropIfGreen({}, suite));
afterAll(closeDoorbell);

async function claim(): Promise<JobClaim> {
  const claimed = await claimNextJob(newId());
  if (!claimed) throw new Error('There was nothing to claim.');
  return claimed;
}

/** As if the worker had not been heard of for `seconds`. */
async function silentFor(seconds: number): Promise<void> {
  await db.sequelize.query(
    `UPDATE job_runs SET heartbeat_at = now() - interval '${seconds} seconds' WHERE id = $1`,
    { bind: [jobId] },
  );
}

const write = (spots: number[]) => (held: JobClaim) =>
  commitClaim(held, 'analysis', async (transaction) => {
    const chunk = {
      chunk: 0,
      firstFrame: 0,
      frames: 1,
      spotCount: spots.length,
      spotsPerFrame: [spots.length],
      spots: Uint8Array.from(spots),
    };
    await saveSpotChunk(analysis.id, chunk, transaction);
  });

async function storedSpots(): Promise<number[]> {
  const [rows] = await db.sequelize.query('SELECT spots FROM spot_chunks WHERE analysis_id = $1', {
    bind: [analysis.id],
  });
  return (rows as { spots: Buffer }[]).flatMap((row) => [...row.spots]);
}

test('a worker that comes back after its work was given to another can write nothing', async () => {
  const late = await claim();
  await silentFor(21);
  expect(await reapSilent(handlers, SILENCE_MS, quiet)).toBe(1);
  const other = await claim();
  expect(other).toMatchObject({ id: late.id, attempt: late.attempt + 1 });

  await expect(write([1])(late)).rejects.toBeInstanceOf(LostClaimError);
  expect(await renewClaim(late, 0.5)).toBe(false);
  expect(await storedSpots()).toEqual([]);

  await write([2])(other);
  expect(await storedSpots()).toEqual([2]);
  expect((await jobRow(jobId)).state).toBe('done');
  await expect(write([3])(late)).rejects.toBeInstanceOf(LostClaimError);
  expect(await storedSpots()).toEqual([2]);
});

test('a worker that was reaped but not yet replaced can write nothing either', async () => {
  const late = await claim();
  await silentFor(21);
  await reapSilent(handlers, SILENCE_MS, quiet);
  await expect(write([1])(late)).rejects.toBeInstanceOf(LostClaimError);
  expect(await storedSpots()).toEqual([]);
});

test('a worker that was silent for less than the bound keeps its work', async () => {
  const held = await claim();
  await silentFor(19);
  expect(await reapSilent(handlers, SILENCE_MS, quiet)).toBe(0);
  await write([1])(held);
  expect(await storedSpots()).toEqual([1]);
});

test('the same result cannot be written twice by one claim', async () => {
  const held = await claim();
  await write([1])(held);
  await expect(write([2])(held)).rejects.toBeInstanceOf(LostClaimError);
  expect(await storedSpots()).toEqual([1]);
});

test('work whose workers die three times is given up with a reason that a person can read', async () => {
  for (let i = 0; i < 3; i++) {
    await claim();
    await silentFor(30);
    await reapSilent(handlers, SILENCE_MS, quiet);
  }
  expect(await claimNextJob(newId())).toBeNull();
  expect(await jobRow(jobId)).toMatchObject({ state: 'failed', attempt: 3, errorCode: 'WORKER_LOST' });
  const failed = await models().Analysis.findByPk(analysis.id);
  expect(failed).toMatchObject({ state: 'failed', errorCode: 'WORKER_LOST' });
  expect(failed?.errorDetail).toContain('Failed 3 times');
  expect(failed?.errorDetail).toContain('The worker stopped answering.');
  expect(failed?.errorDetail).toContain(jobId);
});

test('of many workers that ask at once exactly one gets a piece of work', async () => {
  const claims = await Promise.all(Array.from({ length: 8 }, () => claimNextJob(newId())));
  expect(claims.filter(Boolean)).toHaveLength(1);
});

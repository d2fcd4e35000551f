import { afterAll, beforeAll, beforeEach, expect, test } from 'vitest';
import { closeDoorbell, DOORBELL_QUEUE } from '@/jobs/doorbell';
import { enqueueIngest } from '@/jobs/ingest-recording';
import { startAnalysis } from '@/jobs/start-analysis';
import { getSequelize } from '@/models/database';
import { models } from '@/models';
import { freshDatabase, type FreshDatabase } from '../helpers/fresh-database';
import { makeLab, makeRecording, type LabRows } from '../helpers/lab-rows';

let db: FreshDatabase;
let lab: LabRows;

beforeAll(async () => {
  db = await freshDatabase();
});
beforeEach(async () => {
  lab = await makeLab();
});
afterAll(({}, suite) => db.dropIfGreen({}, suite));
afterAll(closeDoorbell);

const CONDITIONS = { pixelSize_m: 5e-6, frameInterval_s: 5e-3 };

async function bells(): Promise<number> {
  const [rows] = await db.sequelize.query(
    `SELECT count(*)::int AS n FROM pgboss.job WHERE name = '${DOORBELL_QUEUE}'`,
  );
  return (rows[0] as { n: number }).n;
}

test('work, its bell and the row it is for appear together, and only when the transaction commits', async () => {
  const recording = await makeRecording(lab);
  const request = {
    labId: lab.labId,
    recording,
    conditions: CONDITIONS,
    recipeRequest: {},
    userId: lab.userId,
  };
  await getSequelize().transaction((transaction) => startAnalysis(request, transaction));
  const before = {
    bells: await bells(),
    jobs: await models().JobRun.count(),
    analyses: await models().Analysis.count(),
  };

  await expect(
    getSequelize().transaction(async (transaction) => {
      await startAnalysis(request, transaction);
      throw new Error('changed my mind');
    }),
  ).rejects.toThrow('changed my mind');
  expect({
    bells: await bells(),
    jobs: await models().JobRun.count(),
    analyses: await models().Analysis.count(),
  }).toEqual(before);

  await getSequelize().transaction((transaction) => startAnalysis(request, transaction));
  expect(await bells()).toBe(before.bells + 1);
  expect(await models().JobRun.count()).toBe(before.jobs + 1);
  expect(await models().Analysis.count()).toBe(before.analyses + 1);
});

test('the same check of a recording is not asked for twice while it waits', async () => {
  const { id, labId } = await makeRecording(lab, { state: 'checking' });
  const ask = () =>
    getSequelize().transaction((transaction) => enqueueIngest({ recordingId: id, labId }, transaction));
  expect(await ask()).toEqual(expect.any(String));
  expect(await ask()).toBeNull();
  expect(await models().JobRun.count({ where: { subjectId: id } })).toBe(1);
});

test('an analysis keeps the conditions and the recipe it was asked with', async () => {
  const recording = await makeRecording(lab);
  const analysis = await getSequelize().transaction((transaction) =>
    startAnalysis(
      {
        labId: lab.labId,
        recording,
        conditions: CONDITIONS,
        recipeRequest: { longestStepPx: 6 },
        userId: null,
      },
      transaction,
    ),
  );
  const stored = await models().Analysis.findByPk(analysis.id);
  expect(stored).toMatchObject({
    state: 'waiting',
    stage: 'measure-image',
    frames: 40,
    recipeRequest: { longestStepPx: 6 },
    conditions: CONDITIONS,
  });
});

test('a recipe that the recording does not allow is refused with field, value and bound', async () => {
  const recording = await makeRecording(lab);
  const start = getSequelize().transaction((transaction) =>
    startAnalysis(
      {
        labId: lab.labId,
        recording,
        conditions: CONDITIONS,
        recipeRequest: { longestStepPx: 65 },
        userId: null,
      },
      transaction,
    ),
  );
  await expect(start).rejects.toMatchObject({
    code: 'PARAM_RANGE',
    errors: [{ path: 'recipe.longestStepPx', message: expect.stringMatching(/at most 64.*65/) }],
  });
});

test('a recording that is still being checked cannot be analysed', async () => {
  const recording = await makeRecording(lab, { state: 'checking' });
  const start = getSequelize().transaction((transaction) =>
    startAnalysis(
      { labId: lab.labId, recording, conditions: CONDITIONS, recipeRequest: {}, userId: null },
      transaction,
    ),
  );
  await expect(start).rejects.toMatchObject({ code: 'STATE' });
});

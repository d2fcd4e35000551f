import { afterAll, beforeAll, expect, test } from 'vitest';
import { runProposal } from '@/models/queries/run-proposal';
import { freshDatabase } from '../helpers/fresh-database';
import { makeLab, makeRecording, makeRun, type LabRows } from '../helpers/lab-rows';

const database = await freshDatabase();
let lab: LabRows;

beforeAll(async () => {
  lab = await makeLab();
});
afterAll(database.dropIfGreen);

test('the newest recording that knows its scale proposes it to the run', async () => {
  const run = await makeRun(lab, { pixelSizeM: null, frameIntervalS: null });
  await makeRecording(lab, { runId: run.id, name: 'old.tif', metadata: { pixelSizeM: 5e-6 } });
  await makeRecording(lab, {
    runId: run.id,
    name: 'new.tif',
    metadata: { pixelSizeM: 8e-6, frameIntervalS: 4e-3 },
  });
  await makeRecording(lab, { runId: run.id, name: 'mute.tif', metadata: {} });
  expect(await runProposal(lab.labId, run.id)).toEqual({
    from: 'new.tif',
    pixelSize_m: 8e-6,
    frameInterval_s: 4e-3,
  });
});

test('a recording of another laboratory proposes nothing', async () => {
  const other = await makeLab('Another Laboratory');
  const run = await makeRun(lab, { pixelSizeM: null });
  await makeRecording(lab, { runId: run.id, metadata: { pixelSizeM: 5e-6 } });
  expect(await runProposal(other.labId, run.id)).toBeNull();
});

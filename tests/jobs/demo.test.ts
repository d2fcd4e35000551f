import { mkdtemp, rm, stat } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { hashPassword, passwordFits, passwordProblem } from '@/auth/password';
import { newDemoFile, readDemoFile, signInText, writeDemoFile } from '@/jobs/demo/demo-accounts';
import { DEMO_CAMPAIGNS, type DemoCampaign } from '@/jobs/demo/demo-plan';
import { ensureDemoLab } from '@/jobs/demo/make-demo-lab';
import { makeDemoRecordings } from '@/jobs/demo/make-demo-recordings';
import { demoCamera, demoScene, makeDemoStack } from '@/jobs/demo/make-demo-stack';
import { closeDoorbell } from '@/jobs/doorbell';
import { stackFile } from '@/jobs/stack-folder';
import { ROLES } from '@/lib/access';
import { models } from '@/models';
import { inspectStack } from '@/stacks/inspect-stack';
import { openStack } from '@/stacks/open-stack';
import { deriveRun } from '@/tracking/flow/derive-run';
import { createRenderer } from '@/tracking/simulate/render';
import { CONDITIONS, SCENE } from '../helpers/demo-recording';
import { expectWithin } from '../helpers/expect-within';
import { freshDatabase, type FreshDatabase } from '../helpers/fresh-database';

let db: FreshDatabase;
let folder: string;
const dataBefore = process.env.BEADLINE_DATA;
/** The demonstration with short recordings: what is tested here doesn't depend on their length. */
const SHORT: DemoCampaign[] = DEMO_CAMPAIGNS.map((campaign) => ({
  ...campaign,
  runs: campaign.runs.map((run) => ({
    ...run,
    recordings: run.recordings.map((recording) => ({
      ...recording,
      scene: { ...recording.scene, frames: 2 },
    })),
  })),
}));
const silent = () => undefined;

beforeAll(async () => {
  db = await freshDatabase();
  folder = await mkdtemp(join(tmpdir(), 'beadline-demo-'));
  process.env.BEADLINE_DATA = folder;
});
afterAll(({}, suite) => db.dropIfGreen({}, suite));
afterAll(async () => {
  await closeDoorbell();
  await rm(folder, { recursive: true, force: true });
  process.env.BEADLINE_DATA = dataBefore;
});

test('every role has an account whose password is its own and good enough, told at each start', async () => {
  const file = newDemoFile();
  await writeDemoFile(file);
  expect((await stat(join(folder, 'demo-accounts.json'))).mode & 0o777).toBe(0o600);
  expect(await readDemoFile()).toEqual(file);
  expect(file.accounts.map(({ role }) => role)).toEqual([...ROLES]);
  expect(new Set(file.accounts.map(({ password }) => password)).size).toBe(ROLES.length);
  for (const { role, email, name, password } of file.accounts) {
    expect(email).toMatch(new RegExp(`^${role.replaceAll('_', '-')}@[a-z-]+\\.test$`));
    expect(passwordProblem(password, [name, email])).toBeNull();
    expect(signInText(file)).toContain(`${email.padEnd(37)} ${password}`);
  }
});

test('the second start adds nothing, and a recording that is gone from the list is not made again', async () => {
  const file = (await readDemoFile())!;
  const counts = async () => {
    const { Campaign, JobRun, Lab, Recording, Run, User } = models();
    return Promise.all(
      [Lab, User, Campaign, Run, Recording, JobRun].map((model) => (model as typeof Lab).count()),
    );
  };
  const labId = await ensureDemoLab(file, hashPassword);
  await makeDemoRecordings(labId, file, silent, SHORT);
  const first = await counts();
  expect(first).toEqual([1, 5, 3, 7, 6, 6]);

  const again = (await readDemoFile())!;
  expect(await ensureDemoLab(again, hashPassword)).toBe(labId);
  await models().Recording.update(
    { deletedAt: new Date() },
    { where: { id: again.recordings['grid-early'] } },
  );
  await makeDemoRecordings(labId, again, silent, SHORT);
  expect(await counts()).toEqual(first);

  const { email, password } = file.accounts[0];
  const user = await models().User.findOne({ where: { email } });
  expect(await passwordFits(user!.passwordHash, password)).toBe(true);
});

test('recordings stand in the way of uploads: bytes in place, being checked, to be analysed when ready', async () => {
  const recordings = await models().Recording.findAll();
  for (const { id, bytes } of recordings) {
    expect((await stat(stackFile(id))).size).toBe(Number(bytes));
    const job = await models().JobRun.findOne({ where: { subjectId: id } });
    expect(job).toMatchObject({ kind: 'ingest-recording', payload: { analyseWhenReady: { recipe: {} } } });
  }
});

test('the simulated stack is read back pixel by pixel, with its scale', async () => {
  const dir = await mkdtemp(join(folder, 'stack-'));
  const path = join(dir, 'stack.bin');
  const scene = { ...SCENE, frames: 3 };
  await makeDemoStack(path, scene, CONDITIONS);
  const report = await inspectStack({ kind: 'file', path, name: 'scene.tif' }, dir);
  expect(report).toMatchObject({ state: 'ready', frames: 3, width: 160, height: 128, bitDepth: 16 });
  expectWithin(report.metadata.pixelSizeM!, CONDITIONS.pixelSize_m, { rel: 1e-9 });
  expectWithin(report.metadata.frameIntervalS!, CONDITIONS.frameInterval_s, { rel: 1e-9 });
  const stack = await openStack(dir);
  const renderer = createRenderer(demoScene(scene, CONDITIONS), demoCamera(scene.seed));
  for (let frame = 0; frame < 3; frame++) {
    const { counts } = await stack.readFrame(frame);
    expect(
      Buffer.from(Uint16Array.from(counts).buffer).equals(Buffer.from(renderer.renderFrame(frame).buffer)),
    ).toBe(true);
  }
  await stack.close();
});

test('the scenes hold the line density that the conditions of their runs lead to expect', () => {
  for (const run of DEMO_CAMPAIGNS[0].runs) {
    const { expectedSpacing_m, vn_m_s } = deriveRun(run.conditions).values;
    for (const { scene } of run.recordings) {
      expectWithin(1 / Math.sqrt(scene.lineDensityM2), expectedSpacing_m!, { rel: 1e-9 });
      expect(scene.vnMPerS).toBe(vn_m_s);
      // A step of more than the longest that linking looks for by default would lose tracers.
      expect((scene.vnMPerS * run.conditions.frameInterval_s!) / run.conditions.pixelSize_m!).toBeLessThan(6);
    }
  }
});

test('the planned run has no recording and is warned about', () => {
  const plan = DEMO_CAMPAIGNS.at(-1)!.runs[0];
  expect(plan.recordings).toEqual([]);
  expect(deriveRun(plan.conditions).warnings.map(({ code }) => code)).toContain('STEP_LARGER_THAN_SPACING');
});

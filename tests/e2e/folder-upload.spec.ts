import { mkdir, mkdtemp } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Browser } from 'playwright-core';
import sharp from 'sharp';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { createRandom } from '@/tracking/random';
import { closeDatabase } from '@/models/database';
import type { RecordingView } from '@/lib/views/recording-view';
import { ApiScript } from '../helpers/api-client';
import { sharedServer } from '../helpers/server';
import { smallConditions } from '../helpers/small-stack';
import { makeTestLab, type TestLab } from '../helpers/test-lab';
import { until } from '../helpers/until';
import { launchBrowser, openWindow, signIn } from './support/browser';

const server = sharedServer();
const FRAMES = 11;
const SIDE = 48;

let browser: Browser;
let lab: TestLab;

beforeAll(async () => {
  lab = await makeTestLab(server.databaseUrl);
  browser = await launchBrowser();
});
afterAll(async () => {
  await browser?.close();
  await closeDatabase();
});

/** A folder of 16-bit grey frames; frame `i` is brighter by `i`, so that their order can be told. */
async function writeFrames(): Promise<string> {
  const folder = join(await mkdtemp(join(process.env.TEST_FOLDER || tmpdir(), 'frames-')), 'night-7');
  await mkdir(folder);
  const random = createRandom(5);
  for (let i = 0; i < FRAMES; i++) {
    const counts = Uint16Array.from({ length: SIDE * SIDE }, () => 200 + 20 * i + random.normal() * 3);
    const raw = { width: SIDE, height: SIDE, channels: 1 as const };
    await sharp(counts, { raw })
      .toColourspace('grey16')
      .png()
      .toFile(join(folder, `frame-${i}.png`));
  }
  return folder;
}

it('a folder of frames chosen in the browser becomes one recording, in natural order', async () => {
  const person = lab.people.experimentalist;
  const script = new ApiScript(server.baseUrl, person.token);
  const campaign = await script.post<{ id: string }>('/api/v1/campaigns', { name: 'Folders' });
  const run = await script.post<{ id: string }>(`/api/v1/campaigns/${campaign.id}/runs`, {
    name: 'Run 1',
    ...smallConditions,
  });
  const { page } = await openWindow(browser);
  await signIn(page, person);
  await page.goto(`/runs/${run.id}/recordings`);
  const chooser = page.waitForEvent('filechooser');
  await page.getByRole('button', { name: 'Choose a folder' }).click();
  await (await chooser).setFiles(await writeFrames());
  const row = page.getByRole('table', { name: 'Recordings' }).getByRole('row', { name: /night-7/ });
  await row.getByText('ready').waitFor({ timeout: 60_000 });

  const { items } = await until(
    () => script.json<{ items: RecordingView[] }>(`/api/v1/runs/${run.id}/recordings`),
    ({ items: list }) => list[0]?.state === 'ready',
  );
  expect(items).toHaveLength(1);
  expect(items[0]).toMatchObject({ kind: 'folder', frames: FRAMES, width: SIDE, height: SIDE, bitDepth: 16 });
  const { meanCounts } = items[0].imageQuality!.brightness;
  expect(meanCounts).toEqual([...meanCounts].sort((a, b) => a - b));
}, 120_000);

import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, expect, it } from 'vitest';
import sharp from 'sharp';
import { uploadStack } from '../helpers/analysed-recording';
import { sharedServer } from '../helpers/server';
import { closeTusClient, TusClient } from '../helpers/tus-client';

const { baseUrl, databaseUrl, dataDir } = sharedServer();
const FILE = join(process.cwd(), 'tests', 'fixtures', 'hdf5', 'nexus.nxs');
let client: TusClient;
beforeAll(async () => {
  client = await TusClient.inNewLab(baseUrl, databaseUrl);
});
afterAll(closeTusClient);

it('a NeXus file becomes a recording whose frames the server shows', async () => {
  const recording = await uploadStack(client.script, client.runId, FILE);
  expect(recording).toMatchObject({ state: 'ready', frames: 4, width: 7, height: 6, refusal: null });
  const answer = await client.script.request(`/api/v1/recordings/${recording.id}/frames/1?low=0&high=255`, {
    headers: { Accept: 'image/png' },
  });
  expect(answer.status).toBe(200);
  const { data, info } = await sharp(await answer.arrayBuffer())
    .greyscale()
    .raw()
    .toBuffer({ resolveWithObject: true });
  expect([info.width, info.height]).toEqual([7, 6]);
  // Frame 1 as tests/fixtures/hdf5/make.py writes it: 17 + 5 x + 11 y + x y, all below 255.
  const wanted = Array.from(
    { length: 42 },
    (_, i) => 17 + 5 * (i % 7) + 11 * Math.floor(i / 7) + (i % 7) * Math.floor(i / 7),
  );
  expect(Array.from(data)).toEqual(wanted);
  expect(readFileSync(join(dataDir, 'stacks', recording.id, 'stack.bin')).equals(readFileSync(FILE))).toBe(
    true,
  );
});

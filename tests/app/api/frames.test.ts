import { mkdir } from 'node:fs/promises';
import { dirname } from 'node:path';
import sharp from 'sharp';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { makeDemoStack } from '@/jobs/demo/make-demo-stack';
import { stackFile, stackFolder } from '@/jobs/stack-folder';
import { newId } from '@/lib/ids';
import { models } from '@/models';
import { inspectStack } from '@/stacks/inspect-stack';
import { openStack } from '@/stacks/open-stack';
import { call, webSettings } from '../../helpers/call-route';
import { freshDatabase, type FreshDatabase } from '../../helpers/fresh-database';
import { makeRecording, makeRun, type LabRows } from '../../helpers/lab-rows';
import { smallConditions, smallScene } from '../../helpers/small-stack';
import { makeTestLab } from '../../helpers/test-lab';

const FRAMES = 12;
let database: FreshDatabase;
let token: string;
let rows: LabRows;
let path: string;
let recordingId: string;

beforeAll(async () => {
  webSettings();
  database = await freshDatabase();
  const lab = await makeTestLab(database.url);
  const { userId } = lab.people.annotator;
  ({ token } = lab.people.annotator);
  const campaign = await models().Campaign.create({
    id: newId(),
    labId: lab.labId,
    name: 'C',
    createdBy: userId,
  });
  rows = { labId: lab.labId, userId, campaignId: campaign.id };
  const run = await makeRun(rows);
  recordingId = newId();
  await mkdir(dirname(stackFile(recordingId)), { recursive: true });
  await makeDemoStack(stackFile(recordingId), { ...smallScene, frames: FRAMES }, smallConditions);
  const source = { kind: 'file', path: stackFile(recordingId), name: 'small.tif' } as const;
  const report = await inspectStack(source, stackFolder(recordingId));
  expect(report.state).toBe('ready');
  await makeRecording(rows, { id: recordingId, runId: run.id, frames: FRAMES, width: 160, height: 160 });
  path = `/api/v1/recordings/${recordingId}/frames`;
});
afterAll(({}, suite) => database.dropIfGreen({}, suite));

const get = (frame: string | number, query = '', headers: Record<string, string> = {}) =>
  call('GET', `${path}/${frame}${query}`, { token, headers });
const pixelsOf = async (response: Response) =>
  sharp(Buffer.from(await response.arrayBuffer()))
    .toColourspace('b-w')
    .raw()
    .toBuffer({ resolveWithObject: true });

describe('frames as pictures', () => {
  it('as PNG show every count between low and high by a straight line, rounded', async () => {
    const response = await get(5, '?low=100&high=355', { accept: 'image/png' });
    expect(response.headers.get('content-type')).toBe('image/png');
    const { data, info } = await pixelsOf(response);
    const stack = await openStack(stackFolder(recordingId));
    const { counts } = await stack.readFrame(5);
    await stack.close();
    expect([info.width, info.height, info.channels]).toEqual([160, 160, 1]);
    // 255 grey steps for 255 counts: a count of 100 + n is grey n.
    const expected = Uint8Array.from(counts, (count) => Math.max(0, Math.min(255, Math.round(count - 100))));
    expect(Buffer.from(expected).equals(data)).toBe(true);
  });

  it.each([
    [undefined, 'image/webp'],
    ['*/*', 'image/webp'],
    ['image/avif,image/webp,image/png,*/*;q=0.8', 'image/webp'],
    ['image/png', 'image/png'],
    ['image/webp;q=0.5, image/png', 'image/png'],
    ['text/html', 'image/webp'],
  ])('for Accept %j are %s', async (accept, type) => {
    const response = await get(0, '', accept ? { accept } : {});
    expect([response.status, response.headers.get('content-type')]).toEqual([200, type]);
  });

  it('are cached by the browser alone, for a day, and not sent again', async () => {
    const first = await get(0);
    expect(first.headers.get('cache-control')).toBe('private, max-age=86400, immutable');
    expect(first.headers.get('vary')).toBe('Accept, Authorization, Cookie');
    const etag = first.headers.get('etag')!;
    const again = await get(0, '', { 'if-none-match': etag });
    expect([again.status, await again.text()]).toEqual([304, '']);
    expect((await get(0, '?low=1&high=9', { 'if-none-match': etag })).status).toBe(200);
  });

  it('come as small as asked for, never larger than they are', async () => {
    expect((await pixelsOf(await get(0, '?width=80'))).info).toMatchObject({ width: 80, height: 80 });
    expect((await pixelsOf(await get(0, '?width=4000'))).info).toMatchObject({ width: 160, height: 160 });
  });

  it.each([FRAMES, -1, 'x', '1.5', '1e0'])('frame %s is not there', async (frame) => {
    expect((await get(frame)).status).toBe(404);
  });

  it.each(['?low=9&high=9', '?low=abc', '?width=0', '?width=99999', '?colour=red'])(
    '%s is refused',
    async (query) => {
      expect((await get(0, query)).status).toBe(400);
    },
  );

  it('of a recording that is not ready answer 409', async () => {
    const { id } = await makeRecording(rows, { state: 'refused' });
    expect((await call('GET', `/api/v1/recordings/${id}/frames/0`, { token })).status).toBe(409);
  });

  it('whose file was damaged since answer 503 with a sentence, and nothing of the disk', async () => {
    const { id } = await makeRecording(rows, { frames: 5 });
    const response = await call('GET', `/api/v1/recordings/${id}/frames/0`, { token });
    const text = await response.text();
    expect(response.status).toBe(503);
    expect(text).not.toContain(stackFolder(id));
  });
});

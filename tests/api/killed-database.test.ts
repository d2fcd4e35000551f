import { chmodSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { readFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { newId } from '@/lib/ids';
import type { AnalysisView, TrackWindowView } from '@/lib/views/analysis-view';
import type { CorrectionList, CorrectionsStored } from '@/lib/views/correction-view';
import type { RecordingView } from '@/lib/views/recording-view';
import { closeDatabase } from '@/models/database';
import { onDatabase } from '@/scripts/endure/database';
import { privateDatabaseUrl, readSecrets } from '@/scripts/platform/secrets.mjs';
import { uploadStack } from '../helpers/analysed-recording';
import { ApiScript, breakUpload, createUpload, patchUpload, uploadOffset } from '../helpers/api-client';
import { patiently } from '../helpers/patiently';
import { makeSmallDisk, mayMount, type SmallDisk } from '../helpers/small-disk';
import { smallConditions, writeSmallStack } from '../helpers/small-stack';
import { startProduct, type Product } from '../helpers/start-product';
import { makeTestLab } from '../helpers/test-lab';
import { until } from '../helpers/until';

// A product of its own with its private cluster: the one that other tests share must not be killed.

const SLOW = { withinMs: 180_000, everyMs: 100 };
/** A segment of the log of PostgreSQL, bytes. */
const SEGMENT = 16 * 2 ** 20;

let disk: SmallDisk | null = null;
let dataDir: string;
let product: Product;
let databaseUrl: string;
let script: ApiScript;
let runId: string;
let stack: string;
/** What a calm day gives: tracks as linked, and as corrected. */
let calm: { raw: string; corrected: string };

beforeAll(async () => {
  // In memory where that is possible, so that it can be filled to the last byte.
  if (mayMount) disk = makeSmallDisk(512);
  dataDir = disk?.folder ?? mkdtempSync(join(process.env.TEST_FOLDER ?? tmpdir(), 'killed-'));
  if (!disk) chmodSync(dataDir, 0o711);
  product = await startProduct({ BEADLINE_DATA: dataDir, workers: 2, BEADLINE_LIMIT_QUIET_SECONDS: '1' });
  databaseUrl = privateDatabaseUrl(readSecrets(dataDir)!);
  const lab = await makeTestLab(databaseUrl);
  await closeDatabase();
  script = new ApiScript(product.baseUrl, lab.people.experimentalist.token);
  ({ stack } = await writeSmallStack());
  const campaign = await script.post<{ id: string }>('/api/v1/campaigns', { name: 'Faults' });
  const run = { name: 'Run 1', drive: 'counterflow', ...smallConditions };
  runId = (await script.post<{ id: string }>(`/api/v1/campaigns/${campaign.id}/runs`, run)).id;
  const recording = await uploadStack(script, runId, stack);
  const id = await analyse(recording.id);
  await finished(id);
  const raw = await tracks(id, '?corrections=none');
  for (const kind of ['split', 'reclass'] as const) await correct(id, kind);
  calm = { raw, corrected: await measuredAgain(id) };
  expect(calm.corrected).not.toBe(calm.raw);
}, 300_000);

afterAll(async () => {
  await product?.stop();
  if (disk) disk.remove();
  else rmSync(dataDir, { recursive: true, force: true });
});

const postgres = (): number | null => {
  const { children } = JSON.parse(readFileSync(join(dataDir, 'running.json'), 'utf8')) as {
    children: { name: string; pid: number | null }[];
  };
  return children.find(({ name }) => name === 'postgres')?.pid ?? null;
};
const killDatabase = () => process.kill(postgres()!, 'SIGKILL');

const analyse = async (recordingId: string) =>
  (await script.post<AnalysisView>(`/api/v1/recordings/${recordingId}/analyses`, { recipe: {} })).id;
const look = (id: string) => patiently(() => script.json<AnalysisView>(`/api/v1/analyses/${id}`));
const tracks = (id: string, query = '') =>
  patiently(() => script.text(`/api/v1/analyses/${id}/tracks.csv${query}`));

async function finished(id: string): Promise<void> {
  const end = await until(
    () => look(id),
    ({ state }) => ['done', 'failed', 'stopped'].includes(state),
    SLOW,
  );
  expect(end).toMatchObject({ state: 'done', error: null });
}

async function measuredAgain(id: string): Promise<string> {
  await until(
    () => look(id),
    ({ staleSince }) => staleSince === null,
    SLOW,
  );
  return tracks(id);
}

/** One correction of the longest track there is, sent as an editor does until there is an answer. */
async function correct(id: string, kind: 'split' | 'reclass'): Promise<CorrectionsStored> {
  const path = `/api/v1/analyses/${id}`;
  const {
    tracks: numbers,
    firstFrame,
    lastFrame,
  } = await patiently(() => script.json<TrackWindowView>(`${path}/tracks?from=0&to=47`));
  const lengths = numbers.map((_, i) => lastFrame![i] - firstFrame![i]);
  const i = lengths.indexOf(Math.max(...lengths));
  const body =
    kind === 'split'
      ? { kind, track: numbers[i], frame: (firstFrame![i] + lastFrame![i]) >> 1 }
      : { kind, track: numbers[i], population: 'undecided' };
  const { revision } = await patiently(() => script.json<CorrectionList>(`${path}/corrections?limit=1`));
  const headers = {
    'Content-Type': 'application/json',
    'Idempotency-Key': newId(),
    'If-Match': `"${revision}"`,
  };
  return patiently(() =>
    script.json<CorrectionsStored>(`${path}/corrections`, {
      method: 'POST',
      headers,
      body: JSON.stringify(body),
    }),
  );
}

describe('PostgreSQL killed by SIGKILL', () => {
  let recordingId: string;
  let analysisId: string;

  it('in the middle of an upload: it goes on from what was acknowledged', async () => {
    const bytes = new Uint8Array(await readFile(stack));
    const half = Math.floor(bytes.length / 2);
    const upload = await createUpload(script, bytes.length, { filename: 'cut.tif', run: runId });
    ({ recordingId } = upload);
    expect((await patchUpload(script, upload.location, 0, bytes.slice(0, 10_000))).status).toBe(204);
    const sending = breakUpload(script, upload.location, 10_000, bytes.subarray(10_000), half);
    killDatabase();
    await sending;
    // Every piece is asked for and sent again until the server says that all are there.
    for (let offset = 0; offset < bytes.length;) {
      offset = await patiently(async () => {
        const at = await uploadOffset(script, upload.location);
        expect(at).toBeGreaterThanOrEqual(10_000);
        const answer = await patchUpload(script, upload.location, at, bytes.slice(at));
        if (answer.status !== 204) throw new Error(await answer.text());
        return Number(answer.headers.get('Upload-Offset'));
      });
    }
    const end = await until(
      () => patiently(() => script.json<RecordingView>(`/api/v1/recordings/${recordingId}`)),
      ({ state }) => state === 'ready' || state === 'refused',
      SLOW,
    );
    expect(end).toMatchObject({ state: 'ready', frames: 48 });
  }, 240_000);

  it('in the middle of detection: the analysis finishes by itself with the same tracks', async () => {
    analysisId = await patiently(() => analyse(recordingId));
    await until(
      () => look(analysisId),
      ({ stage }) => stage !== 'measure-image',
      SLOW,
    );
    killDatabase();
    await finished(analysisId);
    expect(await tracks(analysisId, '?corrections=none')).toBe(calm.raw);
  }, 240_000);

  it('in the middle of a correction: it is stored once, and the tables are those of a calm day', async () => {
    for (const kind of ['split', 'reclass'] as const) {
      const storing = correct(analysisId, kind);
      // The second kill falls at another moment of the request than the first.
      if (kind === 'reclass') await new Promise((resolve) => setTimeout(resolve, 15));
      killDatabase();
      await storing;
      await patiently(() => script.json('/api/v1/me'));
    }
    const log = await script.json<CorrectionList>(`/api/v1/analyses/${analysisId}/corrections?limit=200`);
    expect(log.items.map(({ kind }) => kind).sort()).toEqual(['reclass', 'split']);
    expect(await measuredAgain(analysisId)).toBe(calm.corrected);
    expect(await tracks(analysisId, '?corrections=none')).toBe(calm.raw);
  }, 240_000);

  it.skipIf(!mayMount)(
    'F8 a disk of the database that is full: 503 with a time, every acknowledged row stays, and work goes on once there is room',
    async () => {
      const make = async (name: string) => {
        const headers = { 'Content-Type': 'application/json', 'Idempotency-Key': newId() };
        const body = JSON.stringify({ name, description: 'x'.repeat(1000) });
        return script.request('/api/v1/campaigns', { method: 'POST', headers, body });
      };
      const acknowledged: string[] = [];
      // Less room than the next segment of its log needs: it stops when the present one is full.
      disk!.leave(SEGMENT / 4);
      let refused: Response | null = null;
      for (let n = 0; !refused && n < 200; n++) {
        const answer = await make(`Campaign ${n}`);
        if (answer.status === 201) acknowledged.push(((await answer.json()) as { id: string }).id);
        else refused = answer;
        await onDatabase(
          databaseUrl,
          `SELECT pg_logical_emit_message(false, 'test', repeat('x', 1000000))`,
        ).catch(() => undefined);
      }
      expect(acknowledged.length).toBeGreaterThan(0);
      expect([refused?.status, refused?.headers.get('retry-after')]).toEqual([503, '5']);
      expect(((await refused!.json()) as { code: string }).code).toBe('UNAVAILABLE');
      disk!.clear();
      for (const id of acknowledged) await patiently(() => script.json(`/api/v1/campaigns/${id}`));
      await patiently(async () => expect((await make('After')).status).toBe(201));
      expect(await tracks(analysisId)).toBe(calm.corrected);
    },
    240_000,
  );
});

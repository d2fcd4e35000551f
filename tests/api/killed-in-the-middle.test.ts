import { readFile } from 'node:fs/promises';
import { setTimeout } from 'node:timers/promises';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { AnalysisView } from '@/lib/views/analysis-view';
import type { RecordingView } from '@/lib/views/recording-view';
import { closeDatabase } from '@/models/database';
import { uploadStack } from '../helpers/analysed-recording';
import { ApiScript, breakUpload, createUpload, patchUpload, uploadOffset } from '../helpers/api-client';
import { patiently } from '../helpers/patiently';
import { processesOf } from '../helpers/server';
import { smallConditions, writeSmallStack } from '../helpers/small-stack';
import { startServer } from '../helpers/start-server';
import { makeTestLab } from '../helpers/test-lab';
import { until } from '../helpers/until';

/** The one that other tests share must not be killed. */
let server: Awaited<ReturnType<typeof startServer>>;
/** How long the line of an upload that is cut is held once its bytes are sent. */
const LINE_HELD_MS = 600;
const SLOW = { withinMs: 120_000, everyMs: 100 };

async function kill(name: string): Promise<void> {
  const pid = processesOf(server)[name];
  if (pid) process.kill(pid, 'SIGKILL');
  await until(
    () => processesOf(server)[name],
    (now) => typeof now === 'number' && now !== pid,
    { withinMs: 20_000 },
  );
}

describe('processes killed in the middle of their work', () => {
  let script: ApiScript;
  let runId: string;
  let stack: string;
  let calm: string;

  const analyse = async (recordingId: string) =>
    script.post<AnalysisView>(`/api/v1/recordings/${recordingId}/analyses`, { recipe: {} });
  const finished = (id: string) =>
    until(
      () => patiently(() => script.json<AnalysisView>(`/api/v1/analyses/${id}`)),
      ({ state }) => state === 'done' || state === 'failed' || state === 'stopped',
      SLOW,
    );
  const tracks = (id: string) => script.text(`/api/v1/analyses/${id}/tracks.csv?corrections=none`);

  beforeAll(async () => {
    server = await startServer('killed-in-the-middle');
    const lab = await makeTestLab(server.databaseUrl);
    script = new ApiScript(server.baseUrl, lab.people.experimentalist.token);
    ({ stack } = await writeSmallStack({ frames: 64 }));
    const campaign = await script.post<{ id: string }>('/api/v1/campaigns', { name: 'Faults' });
    const run = { name: 'Run 1', drive: 'counterflow', ...smallConditions };
    runId = (await script.post<{ id: string }>(`/api/v1/campaigns/${campaign.id}/runs`, run)).id;
    const recording = await uploadStack(script, runId, stack);
    const { id } = await analyse(recording.id);
    expect((await finished(id)).state).toBe('done');
    calm = await tracks(id);
  }, 180_000);
  afterAll(async () => {
    await closeDatabase();
    await server?.stop();
  });

  it('an upload goes on after its web server was killed, and gives the same tracks', async () => {
    const bytes = new Uint8Array(await readFile(stack));
    const half = Math.floor(bytes.length / 2);
    const { location, recordingId } = await createUpload(script, bytes.length, {
      filename: 'cut.tif',
      run: runId,
    });
    const sending = breakUpload(script, location, 0, bytes, half, LINE_HELD_MS);
    // Killed at once, the server might be gone before the line to it stands.
    await setTimeout(LINE_HELD_MS / 3);
    await kill('web');
    await sending;
    const offset = await patiently(() => uploadOffset(script, location));
    expect(offset).toBeLessThanOrEqual(half);
    // The killed server's claim to the upload ends with its connection to the database.
    await patiently(async () => {
      const answer = await patchUpload(script, location, offset, bytes.slice(offset));
      if (answer.status !== 204) throw new Error(await answer.text());
    });
    await until(
      () => script.json<RecordingView>(`/api/v1/recordings/${recordingId}`),
      ({ state }) => state === 'ready',
      SLOW,
    );
    const { id } = await analyse(recordingId);
    expect((await finished(id)).state).toBe('done');
    expect(await tracks(id)).toBe(calm);
  }, 240_000);

  it('an analysis goes on after both workers were killed, and gives the same tracks', async () => {
    const recording = await uploadStack(script, runId, stack);
    const { id } = await analyse(recording.id);
    await until(
      () => script.json<AnalysisView>(`/api/v1/analyses/${id}`),
      ({ stage }) => stage !== 'measure-image',
      SLOW,
    );
    await Promise.all([kill('worker-1'), kill('worker-2')]);
    const analysis = await finished(id);
    expect(analysis).toMatchObject({ state: 'done', error: null });
    expect(await tracks(id)).toBe(calm);
  }, 240_000);
});

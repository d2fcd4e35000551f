import { execFile } from 'node:child_process';
import { createHash } from 'node:crypto';
import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { promisify } from 'node:util';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { AnalysisView } from '@/lib/views/analysis-view';
import type { RecordingView } from '@/lib/views/recording-view';
import { closeDatabase } from '@/models/database';
import { ApiScript, breakUpload, createUpload, patchUpload, uploadOffset } from '../helpers/api-client';
import { sharedServer } from '../helpers/server';
import { smallConditions, writeSmallStack } from '../helpers/small-stack';
import { makeTestLab } from '../helpers/test-lab';
import { until } from '../helpers/until';

const run = promisify(execFile);
const server = sharedServer();
const TABLES = ['tracks.csv', 'velocities.csv', 'velocity-pdf.csv', 'reconnections.csv', 'estimates.json'];

describe('from nothing to numbers with a token', () => {
  let script: ApiScript;
  let files: Awaited<ReturnType<typeof writeSmallStack>>;
  let recordingId: string;
  let analysisId: string;

  beforeAll(async () => {
    const lab = await makeTestLab(server.databaseUrl);
    script = new ApiScript(server.baseUrl, lab.people.experimentalist.token);
    files = await writeSmallStack();
  });
  afterAll(closeDatabase);

  it('a stack sent in three pieces with a broken connection arrives whole', async () => {
    const campaign = await script.post<{ id: string }>('/api/v1/campaigns', { name: 'Whole road' });
    const runPath = `/api/v1/campaigns/${campaign.id}/runs`;
    const made = await script.post<{ id: string }>(runPath, {
      name: 'Run 1',
      drive: 'counterflow',
      ...smallConditions,
    });
    const bytes = new Uint8Array(await readFile(files.stack));
    const sha256 = createHash('sha256').update(bytes).digest('hex');
    const upload = await createUpload(script, bytes.length, { filename: 'small.tif', run: made.id, sha256 });
    recordingId = upload.recordingId;
    const third = Math.floor(bytes.length / 3);

    expect((await patchUpload(script, upload.location, 0, bytes.slice(0, third))).status).toBe(204);
    await breakUpload(
      script,
      upload.location,
      third,
      bytes.subarray(third, 2 * third),
      Math.floor(third / 2),
    );
    const offset = await until(
      () => uploadOffset(script, upload.location),
      (at) => at >= third,
    );
    expect(offset).toBeLessThanOrEqual(2 * third);
    expect((await patchUpload(script, upload.location, offset, bytes.slice(offset, 2 * third))).status).toBe(
      204,
    );
    const last = await patchUpload(script, upload.location, 2 * third, bytes.slice(2 * third));
    expect(last.status).toBe(204);
    expect(last.headers.get('Beadline-Recording')).toBe(recordingId);

    const recording = await until(
      () => script.json<RecordingView>(`/api/v1/recordings/${recordingId}`),
      ({ state }) => state === 'ready' || state === 'refused',
      { withinMs: 60_000 },
    );
    expect(recording).toMatchObject({
      state: 'ready',
      refusal: null,
      frames: 48,
      width: 160,
      height: 160,
      sha256,
    });
  });

  it('an analysis is followed to its end by server-sent events', async () => {
    const analysis = await script.post<AnalysisView>(`/api/v1/recordings/${recordingId}/analyses`, {
      recipe: {},
    });
    analysisId = analysis.id;
    const stream = await script.text(`/api/v1/analyses/${analysisId}/progress`);
    const events = stream.split('\n\n').filter((block) => block.includes('event: progress'));
    const last = JSON.parse(/^data: (.*)$/m.exec(events.at(-1)!)![1]) as AnalysisView;
    expect(last).toMatchObject({ id: analysisId, state: 'done', progress: 1, error: null });
    expect(last.summary!.tracks).toBeGreaterThan(20);
    expect(typeof last.recipe.spotSizePx).toBe('number');
  }, 180_000);

  it('the estimates name line density and spacing by each method and a combined one', async () => {
    const list = JSON.parse(await script.text(`/api/v1/analyses/${analysisId}/estimates.json`)) as {
      quantity: string;
      method: string;
      value: number | null;
      note: string;
    }[];
    for (const quantity of ['line_density', 'line_spacing']) {
      const methods = list.filter((entry) => entry.quantity === quantity).map(({ method }) => method);
      expect(methods).toEqual(expect.arrayContaining(['neighbour-distance', 'beads-per-length', 'combined']));
    }
    for (const { value, note } of list) expect(value !== null || note.length > 0).toBe(true);
  });

  it.each([1, 2])(
    'the command line with %i threads writes the very same tables',
    async (threads) => {
      const out = join(files.folder, `out-${threads}`);
      const args = [
        files.stack,
        '--conditions',
        files.conditionsFile,
        '--out',
        out,
        '--threads',
        String(threads),
      ];
      await run(process.execPath, ['scripts/analyse.mjs', ...args]);
      for (const table of TABLES) {
        const query = table === 'tracks.csv' ? '?corrections=none' : '';
        const fromServer = await script.text(`/api/v1/analyses/${analysisId}/${table}${query}`);
        expect(await readFile(join(out, table), 'utf8'), table).toBe(fromServer);
      }
    },
    120_000,
  );
});

import { readFile } from 'node:fs/promises';
import type { AnalysisView } from '@/lib/views/analysis-view';
import type { RecordingView } from '@/lib/views/recording-view';
import { createUpload, patchUpload, type ApiScript } from './api-client';
import { smallConditions, writeSmallStack } from './small-stack';
import { until } from './until';

/** Sends a stack whole and waits until it has been checked. */
export async function uploadStack(script: ApiScript, runId: string, path: string): Promise<RecordingView> {
  const bytes = new Uint8Array(await readFile(path));
  const filename = path.split('/').at(-1)!;
  const { location, recordingId } = await createUpload(script, bytes.length, { filename, run: runId });
  const answer = await patchUpload(script, location, 0, bytes);
  if (answer.status !== 204) throw new Error(`${answer.status} ${await answer.text()}`);
  return until(
    () => script.json<RecordingView>(`/api/v1/recordings/${recordingId}`),
    ({ state }) => state === 'ready' || state === 'refused',
    { withinMs: 60_000, everyMs: 200 },
  );
}

/** A campaign with a run, a recording and a finished analysis, made as a script would. */
export async function makeAnalysedRecording(script: ApiScript) {
  const { stack } = await writeSmallStack();
  const campaign = await script.post<{ id: string }>('/api/v1/campaigns', {
    name: 'Counterflow at small heat',
    description: 'Simulated for the tests.',
    tags: ['simulated'],
  });
  const run = await script.post<{ id: string }>(`/api/v1/campaigns/${campaign.id}/runs`, {
    name: 'Run 1, gentle',
    drive: 'counterflow',
    ...smallConditions,
  });
  const recording = await uploadStack(script, run.id, stack);
  const started = await script.post<AnalysisView>(`/api/v1/recordings/${recording.id}/analyses`, {
    recipe: {},
  });
  const analysis = await until(
    () => script.json<AnalysisView>(`/api/v1/analyses/${started.id}`),
    ({ state }) => state === 'done' || state === 'failed',
    { withinMs: 120_000, everyMs: 300 },
  );
  if (analysis.state !== 'done') throw new Error(`The analysis failed: ${analysis.error?.detail}`);
  return { campaignId: campaign.id, runId: run.id, recordingId: recording.id, analysisId: analysis.id };
}

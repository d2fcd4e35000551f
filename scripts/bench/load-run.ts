import { chmod, mkdtemp, rm, stat } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { setTimeout as pause } from 'node:timers/promises';
import { makeDemoStack } from '@/jobs/demo/make-demo-stack';
import { newId } from '@/lib/ids';
import { closeDatabase } from '@/models/database';
import { makeLab } from '@/scripts/endure/make-lab';
import { PatientClient } from '@/scripts/endure/patient-client';
import { startProduct } from '@/scripts/endure/product';
import { CONDITIONS, SCENE } from '@/scripts/endure/stacks';
import { createRandom } from '@/tracking/random';
import { sendStack } from './send-stack';
import { figure, textTable } from './text-table';

const SESSIONS = 50;
const ANALYSES = 2;
/** Long enough that both analyses last while the readers read. */
const SCENE_FRAMES = 1200;
const READ_LEAST_MS = 20_000;
const READ_MOST_MS = 180_000;
/** A person who scrubs asks for the next frame so soon after the last, ms. */
const THINK_MS = 200;
const WINDOW_FRAMES = 20;

/** Answers of one kind. */
interface Answers {
  ms: number[];
  failed: number;
}

export interface LoadRun {
  sessions: number;
  seconds: number;
  analysesDone: number;
  frames: Answers;
  tracks: Answers;
}

interface AnalysisAnswer {
  id: string;
  state: string;
}

/** Fifty readers of frames and tracks at the whole product on loopback, while its workers compute two analyses. */
export async function runLoad(note: (text: string) => void): Promise<LoadRun> {
  const folder = await mkdtemp(join(tmpdir(), 'beadline-load-'));
  await chmod(folder, 0o711);
  const product = await startProduct(join(folder, 'data'), ANALYSES, {
    BEADLINE_LIMIT_CHANGES_PER_MINUTE: '1000000',
  });
  try {
    process.env.DATABASE_URL = product.databaseUrl;
    const { experimentalist } = await makeLab();
    await closeDatabase();
    const origin = `http://127.0.0.1:${product.port}`;
    const client = new PatientClient(origin, experimentalist);
    const campaign = await client.post<{ id: string }>('/api/v1/campaigns', newId(), { name: 'Load' });
    const run = await client.post<{ id: string }>(`/api/v1/campaigns/${campaign.id}/runs`, newId(), {
      name: 'Run',
      ...CONDITIONS,
    });
    note('A short recording to read, a long one to compute on');
    const short = await recordingOf(client, run.id, folder, SCENE.frames);
    const long = await recordingOf(client, run.id, folder, SCENE_FRAMES);
    const first = await analyse(client, short);
    await untilEnded(client, first, () => false);
    const running = await Promise.all(Array.from({ length: ANALYSES }, () => analyse(client, long)));
    note(`${SESSIONS} sessions`);
    const frames: Answers = { ms: [], failed: 0 };
    const tracks: Answers = { ms: [], failed: 0 };
    const began = Date.now();
    let over = false;
    const readers = Array.from({ length: SESSIONS }, async (_, i) => {
      const reader = new PatientClient(origin, experimentalist);
      const random = createRandom(i);
      await pause(THINK_MS * random.uniform());
      while (!over) {
        const frame = random.integer(SCENE.frames);
        await timed(reader, frames, `/api/v1/recordings/${short}/frames/${frame}?width=${100 + i}`);
        const from = Math.min(frame, SCENE.frames - WINDOW_FRAMES);
        await timed(
          reader,
          tracks,
          `/api/v1/analyses/${first}/tracks?from=${from}&to=${from + WINDOW_FRAMES - 1}`,
        );
        await pause(THINK_MS);
      }
    });
    const isLate = () => Date.now() - began > READ_MOST_MS;
    const states = await Promise.all(running.map((id) => untilEnded(client, id, isLate)));
    await pause(Math.max(0, READ_LEAST_MS - (Date.now() - began)));
    over = true;
    await Promise.all(readers);
    const seconds = (Date.now() - began) / 1000;
    return {
      sessions: SESSIONS,
      seconds,
      analysesDone: states.filter((state) => state === 'done').length,
      frames,
      tracks,
    };
  } finally {
    await product.stop();
    await rm(folder, { recursive: true, force: true });
  }
}

async function recordingOf(
  client: PatientClient,
  runId: string,
  folder: string,
  frames: number,
): Promise<string> {
  const path = join(folder, `load-${frames}.tif`);
  await makeDemoStack(path, { ...SCENE, frames }, CONDITIONS);
  return sendStack(client, runId, path, (await stat(path)).size);
}

const analyse = async (client: PatientClient, recordingId: string): Promise<string> =>
  (await client.post<AnalysisAnswer>(`/api/v1/recordings/${recordingId}/analyses`, newId(), { recipe: {} }))
    .id;

async function untilEnded(client: PatientClient, id: string, isLate: () => boolean): Promise<string> {
  for (;;) {
    const { state } = await client.json<AnalysisAnswer>(`/api/v1/analyses/${id}`);
    if (['done', 'failed', 'stopped'].includes(state)) return state;
    await pause(500);
    if (isLate()) return state;
  }
}

async function timed(client: PatientClient, answers: Answers, path: string): Promise<void> {
  const began = performance.now();
  const answer = await client.ask(path);
  answers.ms.push(performance.now() - began);
  if (answer?.status !== 200) answers.failed += 1;
}

const at = (ms: number[], share: number): number =>
  ms.toSorted((a, b) => a - b)[Math.min(ms.length - 1, Math.floor(share * ms.length))] ?? Number.NaN;

/** Requests, errors, median and 95th percentile of both kinds. */
export function loadTable({ sessions, seconds, analysesDone, frames, tracks }: LoadRun): string {
  const row = (name: string, { ms, failed }: Answers) => [
    name,
    String(ms.length),
    String(failed),
    `${figure(at(ms, 0.5))} ms`,
    `${figure(at(ms, 0.95))} ms`,
  ];
  return textTable([
    [
      `${sessions} sessions, ${seconds.toFixed(0)} s, ${analysesDone} analyses done`,
      'requests',
      'errors',
      'median',
      '95th percentile',
    ],
    row('frames', frames),
    row('windows of tracks', tracks),
  ]);
}

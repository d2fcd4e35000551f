import { readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { chmod, mkdtemp, rm, stat } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { setTimeout as pause } from 'node:timers/promises';
import { writeTiff } from '@/jobs/write-tiff';
import { newId } from '@/lib/ids';
import { closeDatabase } from '@/models/database';
import { makeLab } from '@/scripts/endure/make-lab';
import { PatientClient } from '@/scripts/endure/patient-client';
import { startProduct, type EnduringProduct } from '@/scripts/endure/product';
import { CONDITIONS } from '@/scripts/endure/stacks';
import { renderFrames } from './memory-run';
import { sendStack } from './send-stack';
import { figure, textTable } from './text-table';

const LOOK_MS = 250;

/** Most memory that each process had while a stack was sent, checked and analysed, MB. */
export interface ProductMemoryRun {
  frames: number;
  stackMB: number;
  uploadS: number;
  checkedS: number;
  analysedS: number;
  webMB: number;
  workerMB: number;
  computingMB: number;
}

/** The whole product on loopback with one worker: a stack of that many frames goes in and is analysed. */
export async function runProductMemory(
  rendered: ReturnType<typeof renderFrames>,
  frames: number,
): Promise<ProductMemoryRun> {
  const folder = await mkdtemp(join(tmpdir(), 'beadline-memory-'));
  await chmod(folder, 0o711);
  const path = join(folder, 'stack.tif');
  const { width, height } = rendered;
  const frame = (index: number) => rendered.frames[index % rendered.frames.length];
  await writeTiff(path, { width, height, frames, frame });
  const { size } = await stat(path);
  const product = await startProduct(join(folder, 'data'), 1);
  try {
    process.env.DATABASE_URL = product.databaseUrl;
    const { experimentalist } = await makeLab();
    await closeDatabase();
    const client = new PatientClient(`http://127.0.0.1:${product.port}`, experimentalist);
    const campaign = await client.post<{ id: string }>('/api/v1/campaigns', newId(), { name: 'Memory' });
    const run = await client.post<{ id: string }>(`/api/v1/campaigns/${campaign.id}/runs`, newId(), {
      name: 'Run',
      ...CONDITIONS,
    });
    const peaks = watchPeaks(product);
    const began = Date.now();
    let uploadedAt = began;
    const recordingId = await sendStack(client, run.id, path, size, () => (uploadedAt = Date.now()));
    const checkedAt = Date.now();
    const started = await client.post<{ id: string }>(`/api/v1/recordings/${recordingId}/analyses`, newId(), {
      recipe: {},
    });
    for (;;) {
      const { state, error } = await client.json<{ state: string; error: unknown }>(
        `/api/v1/analyses/${started.id}`,
      );
      if (state === 'done') break;
      if (state === 'failed') throw new Error(`The analysis failed: ${JSON.stringify(error)}`);
      await pause(500);
    }
    const seconds = (from: number, to: number) => (to - from) / 1000;
    return {
      ...{ frames, stackMB: size / 2 ** 20, ...peaks.stop() },
      uploadS: seconds(began, uploadedAt),
      checkedS: seconds(uploadedAt, checkedAt),
      analysedS: seconds(checkedAt, Date.now()),
    };
  } finally {
    await product.stop();
    await rm(folder, { recursive: true, force: true });
  }
}

/** Peaks that the system itself keeps (VmHWM), so that none between two looks is missed. */
function watchPeaks({ pids }: EnduringProduct) {
  const most = { webMB: 0, workerMB: 0, computingMB: 0 };
  const look = () => {
    const { web, 'worker-1': worker } = pids();
    if (web) most.webMB = Math.max(most.webMB, peakMB(web));
    if (!worker) return;
    most.workerMB = Math.max(most.workerMB, peakMB(worker));
    for (const child of childrenOf(worker)) most.computingMB = Math.max(most.computingMB, peakMB(child));
  };
  for (const pid of Object.values(pids())) if (pid) resetPeak(pid);
  const timer = setInterval(look, LOOK_MS);
  return {
    stop() {
      clearInterval(timer);
      look();
      return most;
    },
  };
}

function text(path: string): string {
  try {
    return readFileSync(path, 'latin1');
  } catch {
    return '';
  }
}

const peakMB = (pid: number): number =>
  Number(/^VmHWM:\s+(\d+) kB/m.exec(text(`/proc/${pid}/status`))?.[1] ?? 0) / 1024;

/** Linux, proc(5): 5 sets the peak back to what is resident now. */
function resetPeak(pid: number): void {
  try {
    writeFileSync(`/proc/${pid}/clear_refs`, '5');
  } catch {
    // Of another user, or gone.
  }
}

function childrenOf(parent: number): number[] {
  return readdirSync('/proc')
    .filter((entry) => /^\d+$/.test(entry))
    .map(Number)
    .filter((pid) => Number(/^PPid:\s+(\d+)/m.exec(text(`/proc/${pid}/status`))?.[1]) === parent);
}

/** Peaks and times by length of the stack. */
export function productMemoryTable(runs: readonly ProductMemoryRun[]): string {
  const row = (name: string, of: (run: ProductMemoryRun) => number) => [
    name,
    ...runs.map((run) => figure(of(run))),
  ];
  return textTable([
    ['whole product, most memory', ...runs.map(({ frames }) => `${figure(frames)} frames`)],
    row('stack, MB', ({ stackMB }) => stackMB),
    row('web server, MB', ({ webMB }) => webMB),
    row('worker, MB', ({ workerMB }) => workerMB),
    row('its computing process, MB', ({ computingMB }) => computingMB),
    row('sent in, s', ({ uploadS }) => uploadS),
    row('checked in, s', ({ checkedS }) => checkedS),
    row('analysed in, s', ({ analysedS }) => analysedS),
  ]);
}

import { mkdir } from 'node:fs/promises';
import { loadavg } from 'node:os';
import { join } from 'node:path';
import { ComputePool } from '@/jobs/compute/pool';
import { analyseStack, type LocalAnalysis, type LocalStage } from '@/jobs/local/analyse-stack';
import { localStack } from '@/jobs/local/local-stack';
import type { Conditions } from '@/tracking/types';
import { replayedSeconds } from './replay';
import { figure, textTable } from './text-table';

/** A stack to analyse from bytes to numbers. */
export interface WorkersStack {
  name: string;
  path: string;
  megapixels: number;
  conditions: Conditions;
}

export interface WorkersRun {
  stack: WorkersStack;
  workers: number;
  /** The first analysis of these processes, and the quickest of those that followed. */
  cold: LocalAnalysis;
  warm: LocalAnalysis;
  load: number;
}

const WARM_ROUNDS = 2;

/** The whole road in worker processes; the first round also warms their compilers. */
export async function runWorkers(
  workers: number,
  stack: WorkersStack,
  folder: string,
  childPath: string,
): Promise<WorkersRun> {
  const pool = new ComputePool(workers, { childPath });
  const source = await localStack(stack.path);
  const round = async (name: string) => {
    const workDir = join(folder, `${stack.name}-${workers}-${name}`);
    await mkdir(workDir);
    return analyseStack({ source, workDir, conditions: stack.conditions, recipe: {} }, pool);
  };
  try {
    const cold = await round('cold');
    let warm = await round('warm');
    for (let i = 1; i < WARM_ROUNDS; i++) {
      const again = await round(`warm-${i}`);
      if (again.wholeS < warm.wholeS) warm = again;
    }
    return { stack, workers, cold, warm, load: loadavg()[0] };
  } finally {
    await pool.close();
  }
}

/** How many times as fast the second is as the first, warm: all of it, detection alone, and all of it as replayed. */
export function gainOf(one: WorkersRun, two: WorkersRun) {
  const detection = ({ warm }: WorkersRun) => warm.timingsS['detect-spots'];
  return {
    whole: one.warm.wholeS / two.warm.wholeS,
    detection: detection(one) / detection(two),
    // One worker's pieces: what two at a time cost each other belongs to the clock on the wall.
    replayed: replayedSeconds(one.warm, one.workers) / replayedSeconds(one.warm, two.workers),
  };
}

const cpuSeconds = ({ cpuS }: LocalAnalysis): number =>
  Object.values(cpuS)
    .flat()
    .reduce((sum, seconds) => sum + seconds, 0);

/** The product's own processes by the clock on the wall. */
export function workersTable(runs: readonly WorkersRun[]): string {
  const columns = runs.flatMap(({ workers, cold, warm, stack }) => [
    { head: `${workers}, cold`, analysis: cold, stack },
    { head: `${workers}, warm`, analysis: warm, stack },
  ]);
  const row = (label: string, pick: (column: (typeof columns)[number]) => number) => [
    label,
    ...columns.map((column) => figure(pick(column))),
  ];
  const seconds = (label: string, stage: LocalStage) =>
    row(label, ({ analysis }) => analysis.timingsS[stage]);
  return textTable([
    [`workers, ${runs[0].stack.name}`, ...columns.map(({ head }) => head)],
    seconds('check, s', 'check'),
    seconds('measure image, s', 'measure-image'),
    seconds('detection, s', 'detect-spots'),
    seconds('linking, s', 'link-tracks'),
    seconds('measure flow, s', 'measure-flow'),
    row('whole, s', ({ analysis }) => analysis.wholeS),
    row('processor time, s', ({ analysis }) => cpuSeconds(analysis)),
    row('whole, Mpx/s', ({ analysis, stack }) => stack.megapixels / analysis.wholeS),
    row('share of reading in detection', ({ analysis }) => analysis.readingShare),
  ]);
}

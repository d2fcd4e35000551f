import { mkdir } from 'node:fs/promises';
import { join } from 'node:path';
import { ComputePool } from '@/jobs/compute/pool';
import { analyseStack, type LocalAnalysis } from '@/jobs/local/analyse-stack';
import { localStack } from '@/jobs/local/local-stack';
import { peakOfChildrenMB } from './processes';
import type { BenchRecording } from './recording';

export interface WorkersRun {
  workers: number;
  cold: LocalAnalysis;
  warm: LocalAnalysis;
  /** Largest resident memory of a computing process, MB. */
  peakMB: number;
}

const CONDITIONS = { pixelSize_m: 1e-5, frameInterval_s: 5e-3, sheetThickness_m: 1e-4 };

/** The whole road in worker processes, twice: the first round also warms their compilers. */
export async function runWorkers(
  workers: number,
  recording: BenchRecording,
  folder: string,
  childPath: string,
): Promise<WorkersRun> {
  const pool = new ComputePool(workers, { childPath });
  const source = await localStack(recording.tiffPath);
  const round = async (name: string) => {
    const workDir = join(folder, `${workers}-${name}`);
    await mkdir(workDir);
    return analyseStack({ source, workDir, conditions: CONDITIONS, recipe: {}, chunkFrames: 12 }, pool);
  };
  try {
    const cold = await round('cold');
    const warm = await round('warm');
    return { workers, cold, warm, peakMB: peakOfChildrenMB() };
  } finally {
    await pool.close();
  }
}

/** Wall-clock time of all stages, s. */
export const wholeSeconds = ({ timingsS }: LocalAnalysis): number =>
  Object.values(timingsS).reduce((sum, seconds) => sum + seconds, 0);

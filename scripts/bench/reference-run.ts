import { execFile } from 'node:child_process';
import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { promisify } from 'node:util';
import { rootDir } from '@/lib/env';
import type { PipelineRun } from './pipeline-run';
import type { BenchRecording } from './recording';

/** The library on every pixel, or with what somebody who measures would leave out; see the script. */
export type ReferenceMode = 'plain' | 'tuned';

interface ReferenceReport {
  scipy: string;
  seconds: Record<'reading' | 'filter' | 'maxima' | 'fits' | 'linking', number>;
  spots: number;
  links: number;
  peakMB: number;
}

/** Numerical libraries start threads unasked; one core each is the comparison. */
const ONE_THREAD = { OMP_NUM_THREADS: '1', OPENBLAS_NUM_THREADS: '1', MKL_NUM_THREADS: '1' };
const COLUMNS = 4;

/** Runs the script on SciPy over the raw frames. */
export async function runReference(
  python: string,
  mode: ReferenceMode,
  recording: BenchRecording,
  folder: string,
): Promise<PipelineRun> {
  const pointsPath = join(folder, 'reference.f64');
  const { rawPath, width, height, frames } = recording;
  const script = join(rootDir(), 'scripts', 'bench', 'reference.py');
  const args = ['-B', script, mode, rawPath, width, height, frames, pointsPath].map(String);
  const { stdout } = await promisify(execFile)(python, args, { env: { ...process.env, ...ONE_THREAD } });
  const { scipy, seconds, spots, links, peakMB } = JSON.parse(stdout) as ReferenceReport;
  const detection = seconds.filter + seconds.maxima + seconds.fits;
  return {
    name: mode === 'plain' ? `SciPy ${scipy}` : 'SciPy, tuned',
    seconds: {
      reading: seconds.reading,
      measuring: 0,
      search: seconds.filter + seconds.maxima,
      detection,
      linking: seconds.linking,
      whole: seconds.reading + detection + seconds.linking,
    },
    spots,
    links,
    peakMB,
    points: await readPoints(pointsPath),
  };
}

/** Rows of frame, x, y, track as tracks one behind the other, each by frame. */
async function readPoints(path: string): Promise<PipelineRun['points']> {
  const bytes = await readFile(path);
  const values = new Float64Array(new Uint8Array(bytes).buffer);
  const rows = Array.from({ length: values.length / COLUMNS }, (_, row) => COLUMNS * row);
  rows.sort((a, b) => values[a + 3] - values[b + 3] || values[a] - values[b]);
  const start = rows.flatMap((row, i) => (i === 0 || values[row + 3] !== values[rows[i - 1] + 3] ? [i] : []));
  // The script states no errors of its own.
  const unstated = new Float64Array(rows.length).fill(Number.NaN);
  return {
    start: [...start, rows.length],
    frame: rows.map((row) => values[row]),
    xPx: rows.map((row) => values[row + 1]),
    yPx: rows.map((row) => values[row + 2]),
    sxPx: unstated,
    syPx: unstated,
    flags: new Uint8Array(rows.length),
  };
}

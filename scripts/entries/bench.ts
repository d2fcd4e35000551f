import { mkdir, mkdtemp, rm } from 'node:fs/promises';
import { cpus, loadavg, tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { ComputePool } from '@/jobs/compute/pool';
import { localStack } from '@/jobs/local/local-stack';
import { codeVersion } from '@/lib/env';
import { runCore } from '@/scripts/bench/core-run';
import { medianRun, type PipelineRun } from '@/scripts/bench/pipeline-run';
import { makeRecording } from '@/scripts/bench/recording';
import { runReference } from '@/scripts/bench/reference-run';
import { accuracyTable, speedTable, workersTable } from '@/scripts/bench/report';
import { runWorkers } from '@/scripts/bench/workers-run';
import { openStack } from '@/stacks/open-stack';

// Speed and accuracy on a simulated recording, beside those of a script on SciPy in the same run.
// Clocks on a busy machine lie; ratios within one run are what to compare.

const RECORDING = { snr: 4, seed: 1, frames: 64 };
const ROUNDS = 3;

const folder = await mkdtemp(join(tmpdir(), 'beadline-bench-'));
const childPath = fileURLToPath(new URL('./compute-child.mjs', import.meta.url));
const python = process.env.BEADLINE_BENCH_PYTHON || null;
const say = (text: string) => process.stdout.write(`${text}\n`);
const note = (text: string) => process.stderr.write(`${text}\n`);

try {
  note('Simulating the recording');
  const recording = await makeRecording(folder, RECORDING);
  const { width, height, frames, tiffPath } = recording;
  const load = loadavg()[0].toFixed(1);
  say(
    `Beadline ${codeVersion()}, Node ${process.version}, ${cpus().length} x ${cpus()[0]?.model}, load ${load}`,
  );
  say(
    `Standard recording: ${frames} frames of ${width} x ${height} px, SNR ${RECORDING.snr}, seed ${RECORDING.seed}`,
  );

  // The product indexes a stack once; both pipelines then read frames that are in the page cache.
  const stackDir = join(folder, 'indexed');
  await mkdir(stackDir);
  const pool = new ComputePool(1, { childPath });
  const source = await localStack(tiffPath);
  await pool.run('inspectStack', { source, outDir: stackDir, expectedSha256: [], previews: false });
  await pool.close();

  const full: PipelineRun[] = [];
  const quick: PipelineRun[] = [];
  const script: PipelineRun[] = [];
  const stack = await openStack(stackDir);
  // The first round warms the compilers and is not counted.
  for (let round = 0; round <= ROUNDS; round++) {
    note(round === 0 ? 'Warming up' : `Round ${round} of ${ROUNDS}`);
    const runs = [await runCore(stack, 'full'), await runCore(stack, 'quick')];
    if (round === 0) continue;
    full.push(runs[0]);
    quick.push(runs[1]);
    if (python) script.push(await runReference(python, recording, folder));
  }
  await stack.close();
  const core = [medianRun(full), medianRun(quick)];
  const reference = script.length > 0 ? medianRun(script) : null;
  say(`\n${speedTable(core, reference, recording)}`);
  say(`\n${accuracyTable(reference ? [reference, ...core] : core, recording)}`);

  note('The whole road with one worker and with two');
  const workers = [
    await runWorkers(1, recording, folder, childPath),
    await runWorkers(2, recording, folder, childPath),
  ];
  say(`\n${workersTable(workers, recording, reference)}`);
} finally {
  await rm(folder, { recursive: true, force: true });
}

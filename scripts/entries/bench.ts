import { mkdir, mkdtemp, rm, statfs } from 'node:fs/promises';
import { cpus, loadavg, tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { parseArgs } from 'node:util';
import { chooseKernels } from '@/jobs/compute/kernels';
import { ComputePool } from '@/jobs/compute/pool';
import { conditionsForScene, DEMO_CAMPAIGNS } from '@/jobs/demo/demo-plan';
import { makeDemoStack } from '@/jobs/demo/make-demo-stack';
import { localStack } from '@/jobs/local/local-stack';
import { codeVersion } from '@/lib/env';
import { comparePipelines } from '@/scripts/bench/compare';
import { exportCases, exportGoals, exportTable, runExport, type ExportRun } from '@/scripts/bench/export-run';
import { flowGoals, runFlow } from '@/scripts/bench/flow-run';
import { memoryGoal, speedGoals, workersGoal } from '@/scripts/bench/goals';
import { memoryTable, renderFrames, runMemory, type MemoryRun } from '@/scripts/bench/memory-run';
import { loadTable, runLoad } from '@/scripts/bench/load-run';
import { productMemoryTable, runProductMemory } from '@/scripts/bench/product-memory';
import { makeRecording, type BenchRecording } from '@/scripts/bench/recording';
import { accuracyTable, speedTable } from '@/scripts/bench/report';
import { runWorkers, workersTable, type WorkersStack } from '@/scripts/bench/workers-run';
import type { MixedSet } from '@/tracking/simulate/mixed-scene';

// Speed and accuracy on simulated recordings, beside those of a script on SciPy in the same run; what a second
// worker brings; memory. Clocks on a busy machine lie; CPU time and ratios within one run are what to compare.

/** Settings of the core are tried out on other seeds. */
const SEED = 1;
const SHORT_FRAMES = { sparse: 50, dense: 20 } as const;
const ROUNDS = 3;
/** 512 x 512 px of 16 bit are half a megabyte: 300 MB and 3 GB. */
const MEMORY_FRAMES = 600;
const MEMORY_FRAMES_LONG = 6000;
const FREE_BYTES_LEAST = 8 * 2 ** 30;
const CONDITIONS = { pixelSize_m: 1e-5, frameInterval_s: 5e-3, sheetThickness_m: 1e-4 };

const { values: options } = parseArgs({
  options: {
    quick: { type: 'boolean', default: false },
    memory: { type: 'boolean', default: false },
    /** The kernels of the flow alone. */
    flow: { type: 'boolean', default: false },
    load: { type: 'boolean', default: false },
    exports: { type: 'boolean', default: false },
    'product-memory': { type: 'string' },
  },
});
const folder = await mkdtemp(join(tmpdir(), 'beadline-bench-'));
const childPath = fileURLToPath(new URL('./compute-child.mjs', import.meta.url));
const python = process.env.BEADLINE_BENCH_PYTHON || null;
const say = (text: string) => process.stdout.write(`${text}\n`);
const note = (text: string) => process.stderr.write(`${text}\n`);
const summary: string[] = [];

/** The product indexes a stack once; all pipelines then read frames that are in the page cache. */
async function indexed({ name, tiffPath }: BenchRecording): Promise<string> {
  const stackDir = join(folder, `${name}-indexed`);
  await mkdir(stackDir);
  const pool = new ComputePool(1, { childPath });
  try {
    const source = await localStack(tiffPath);
    await pool.run('inspectStack', { source, outDir: stackDir, expectedSha256: [], previews: false });
  } finally {
    await pool.close();
  }
  return stackDir;
}

async function compareOn(set: MixedSet): Promise<BenchRecording> {
  note(`Simulating the ${set} set`);
  const recording = await makeRecording(folder, {
    set,
    seed: SEED,
    ...(options.quick ? { frames: SHORT_FRAMES[set] } : {}),
  });
  const comparison = await comparePipelines(recording, {
    stackDir: await indexed(recording),
    python,
    folder,
    rounds: options.quick ? 1 : ROUNDS,
    note,
  });
  const { width, height, frames } = recording;
  say(`\n${set} set: ${frames} frames of ${width} x ${height} px, seed ${SEED}\n`);
  say(speedTable(comparison));
  say(`\n${accuracyTable(comparison)}`);
  summary.push(...speedGoals(comparison));
  return recording;
}

async function demoStack(): Promise<WorkersStack> {
  const run = DEMO_CAMPAIGNS[0].runs[0];
  const [{ name, scene }] = run.recordings;
  const path = join(folder, name);
  const conditions = conditionsForScene(run.conditions);
  await makeDemoStack(path, scene, conditions);
  const megapixels = (scene.widthPx * scene.heightPx * scene.frames) / 1e6;
  return { name: 'demo recording', path, megapixels, conditions };
}

async function compareWorkers(stack: WorkersStack): Promise<void> {
  note(`One worker and two on the ${stack.name}`);
  const runs = [await runWorkers(1, stack, folder, childPath), await runWorkers(2, stack, folder, childPath)];
  say(`\n${workersTable(runs)}`);
  summary.push(workersGoal(runs[0], runs[1]));
}

async function measureMemory(): Promise<void> {
  const { bavail, bsize } = await statfs(folder);
  const long = options.memory || (!options.quick && bavail * bsize > FREE_BYTES_LEAST);
  const rendered = renderFrames();
  const runs: MemoryRun[] = [];
  for (const frames of [MEMORY_FRAMES, ...(long ? [MEMORY_FRAMES_LONG] : [])]) {
    note(`Memory with ${frames} frames`);
    const run = await runMemory(rendered, frames, folder, childPath);
    if (run) runs.push(run);
  }
  if (runs.length === 0) {
    say('\nThis system does not tell how much memory a process has.');
    return;
  }
  say(`\n${memoryTable(runs)}`);
  summary.push(memoryGoal(runs));
}

/** The whole product with stacks of so many frames, as in `600,6000`: 512 x 512 px of 16 bit are half a megabyte. */
async function measureProduct(list: string): Promise<void> {
  const rendered = renderFrames();
  const runs = [];
  for (const frames of list.split(',').map(Number)) {
    note(`The whole product with ${frames} frames`);
    runs.push(await runProductMemory(rendered, frames));
  }
  say(`\n${productMemoryTable(runs)}`);
}

/** Tables of a data package: seconds and peak memory by format. */
async function measureExports(): Promise<void> {
  const child = fileURLToPath(new URL('./bench-export.mjs', import.meta.url));
  const place = join(folder, 'exports');
  await mkdir(place);
  const runs: ExportRun[] = [];
  for (const one of exportCases(options.quick)) {
    note(`${one.points.toLocaleString('en')} points as ${one.formats.join(', ')}`);
    runs.push(await runExport(one, place, child));
  }
  say(`\n${exportTable(runs)}\n\n${exportGoals(runs).join('\n')}`);
}

async function measureCore(): Promise<void> {
  if (!options.flow) {
    const sparse = await compareOn('sparse');
    await compareOn('dense');
    await compareWorkers(await demoStack());
    const { tiffPath: path, megapixels } = sparse;
    await compareWorkers({ name: 'sparse set', path, megapixels, conditions: CONDITIONS });
    await measureMemory();
  }
  note('Velocities and candidates');
  summary.push(...flowGoals(await runFlow(options.quick)));
  say(`\n${summary.join('\n')}`);
}

try {
  const load = loadavg()[0].toFixed(1);
  say(
    `Beadline ${codeVersion()}, Node ${process.version}, ${cpus().length} x ${cpus()[0]?.model}, load ${load}, kernels ${chooseKernels().name}`,
  );
  if (options.load) say(`\n${loadTable(await runLoad(note))}`);
  else if (options.exports) await measureExports();
  else if (options['product-memory']) await measureProduct(options['product-memory']);
  else await measureCore();
} finally {
  await rm(folder, { recursive: true, force: true });
}

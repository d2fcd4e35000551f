import { chooseKernels } from '@/jobs/compute/kernels';
import { plainKernels } from '@/tracking/kernels/plain-kernels';
import { startCore, type CoreProcess } from './core-process';
import { medianRun, type PipelineRun } from './pipeline-run';
import type { BenchRecording } from './recording';
import { runReference } from './reference-run';

/** Pipelines over the same frames, each at its median over the rounds. */
export interface Comparison {
  recording: BenchRecording;
  /** The script on SciPy as one writes it, and tuned; null where there is no SciPy. */
  plainScript: PipelineRun | null;
  tunedScript: PipelineRun | null;
  full: PipelineRun;
  quick: PipelineRun;
  /** Full effort by the kernels that need no SIMD; null where nothing else runs anyway. */
  plainKernels: PipelineRun | null;
  /** The first pass of full effort, before the compilers knew what to do. */
  cold: PipelineRun;
}

interface CompareOptions {
  stackDir: string;
  python: string | null;
  folder: string;
  rounds: number;
  note(text: string): void;
}

/**
 * Passes that warm a process up and aren't counted. Most of measuring the image and of linking runs once a
 * recording, so that the compilers need some recordings to see what is worth their work.
 */
const WARM_ROUNDS = 10;
/** Without SIMD the warm-up takes long and changes little. */
const PLAIN_WARM_ROUNDS = 2;

/**
 * Lets the pipelines take turns, so that a disturbance of the machine meets all of them; each has a process
 * of its own, which the others leave alone.
 */
export async function comparePipelines(
  recording: BenchRecording,
  { stackDir, python, folder, rounds, note }: CompareOptions,
): Promise<Comparison> {
  const withSimd = chooseKernels().name !== plainKernels.name;
  const full = startCore(stackDir, 'full', 'auto');
  const quick = startCore(stackDir, 'quick', 'auto');
  const plain = withSimd ? startCore(stackDir, 'full', 'plain') : null;
  const runs = new Map<string, PipelineRun[]>();
  const keep = (key: string, run: PipelineRun) => runs.set(key, [...(runs.get(key) ?? []), run]);
  try {
    note(`Warming up on the ${recording.name} set`);
    const cold = { ...(await full.round()), name: 'full, first pass' };
    for (let round = 1; round < WARM_ROUNDS; round++) await full.round();
    for (let round = 0; round < WARM_ROUNDS; round++) await quick.round();
    for (let round = 0; plain && round < PLAIN_WARM_ROUNDS; round++) await plain.round();
    for (let round = 1; round <= rounds; round++) {
      note(`Round ${round} of ${rounds}`);
      keep('full', await warmRound(full));
      keep('quick', await warmRound(quick));
      if (plain) keep('plain', await warmRound(plain));
      if (!python) continue;
      keep('plain script', await runReference(python, 'plain', recording, folder));
      keep('tuned script', await runReference(python, 'tuned', recording, folder));
    }
    const median = (key: string) => {
      const all = runs.get(key);
      return all ? medianRun(all) : null;
    };
    return {
      recording,
      plainScript: median('plain script'),
      tunedScript: median('tuned script'),
      full: medianRun(runs.get('full') ?? []),
      quick: medianRun(runs.get('quick') ?? []),
      plainKernels: median('plain'),
      cold,
    };
  } finally {
    for (const core of [full, quick, plain]) await core?.close();
  }
}

/** A process that waited for its turn has to find its way back into the caches first. */
async function warmRound(core: CoreProcess): Promise<PipelineRun> {
  await core.round();
  return core.round();
}

/** All pipelines of a comparison, the scripts first. */
export const pipelinesOf = ({ plainScript, tunedScript, full, quick, plainKernels: plain }: Comparison) =>
  [plainScript, tunedScript, full, quick, plain].filter((run) => run !== null);

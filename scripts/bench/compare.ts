import { chooseKernels } from '@/jobs/compute/kernels';
import type { StackReader } from '@/stacks/open-stack';
import { plainKernels } from '@/tracking/kernels/plain-kernels';
import { runCore } from './core-run';
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
  /** The first pass of the process, before the compilers knew what to do; null where it had run before. */
  cold: PipelineRun | null;
}

interface CompareOptions {
  stack: StackReader;
  python: string | null;
  folder: string;
  rounds: number;
  /** True where this process has not computed anything yet. */
  fresh: boolean;
  note(text: string): void;
}

/** Lets the pipelines take turns, so that a disturbance of the machine meets all of them. The first round warms up and isn't counted. */
export async function comparePipelines(
  recording: BenchRecording,
  { stack, python, folder, rounds, fresh, note }: CompareOptions,
): Promise<Comparison> {
  const kernels = chooseKernels();
  const both = kernels.name !== plainKernels.name;
  const runs = new Map<string, PipelineRun[]>();
  const keep = (key: string, run: PipelineRun) => runs.set(key, [...(runs.get(key) ?? []), run]);
  let cold: PipelineRun | null = null;
  for (let round = 0; round <= rounds; round++) {
    note(round === 0 ? `Warming up on the ${recording.name} set` : `Round ${round} of ${rounds}`);
    const full = await runCore(stack, 'full', kernels);
    const quick = await runCore(stack, 'quick', kernels);
    const plain = both ? await runCore(stack, 'full', plainKernels) : null;
    if (round === 0) {
      if (fresh) cold = { ...full, name: 'full, first pass' };
      continue;
    }
    keep('full', full);
    keep('quick', quick);
    if (plain) keep('plain', plain);
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
}

/** All pipelines of a comparison, the scripts first. */
export const pipelinesOf = ({ plainScript, tunedScript, full, quick, plainKernels: plain }: Comparison) =>
  [plainScript, tunedScript, full, quick, plain].filter((run) => run !== null);

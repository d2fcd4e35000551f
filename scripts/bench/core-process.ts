import { fork } from 'node:child_process';
import { once } from 'node:events';
import { fileURLToPath } from 'node:url';
import { engineFlags } from '@/jobs/compute/engine-flags';
import type { StackReader } from '@/stacks/open-stack';
import type { Kernels } from '@/tracking/kernels/kernels';
import type { Recipe } from '@/tracking/types';
import { runCore } from './core-run';
import type { PipelineRun } from './pipeline-run';

const HEAP_MB = 1024;

/** A pipeline of the core in a process of its own. */
export interface CoreProcess {
  /** One more pass over the recording. @throws Error when the process is gone */
  round(): Promise<PipelineRun>;
  close(): Promise<void>;
}

/** @param kernels `plain` leaves WebAssembly out, `auto` takes what runs here */
export function startCore(
  stackDir: string,
  effort: Recipe['effort'],
  kernels: 'auto' | 'plain',
): CoreProcess {
  const child = fork(fileURLToPath(new URL('./bench-core.mjs', import.meta.url)), [stackDir, effort], {
    // As the product starts its own.
    execArgv: engineFlags(HEAP_MB),
    // Typed arrays arrive as such.
    serialization: 'advanced',
    env: { ...process.env, BEADLINE_KERNELS: kernels },
  });
  const gone = once(child, 'exit').then(([code]) => {
    throw new Error(`The process of ${effort} effort ended with code ${code}.`);
  });
  // Whoever waits for a round hears of it; a process that was closed has nobody waiting.
  gone.catch(() => undefined);
  return {
    round: async () => {
      const answer = once(child, 'message') as Promise<[PipelineRun]>;
      child.send('round');
      const [run] = await Promise.race([answer, gone]);
      return run;
    },
    close: async () => {
      if (child.connected) child.disconnect();
      await gone.catch(() => undefined);
    },
  };
}

/** In the process itself: one pass for every message, until the other side hangs up. */
export async function answerRounds(
  stack: StackReader,
  effort: Recipe['effort'],
  kernels: Kernels,
): Promise<void> {
  process.on('message', async () => {
    const run = await runCore(stack, effort, kernels);
    process.send?.({ ...run, peakMB: process.resourceUsage().maxRSS / 1024 });
  });
  await once(process, 'disconnect');
  await stack.close();
}

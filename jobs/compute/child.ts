import { setPriority } from 'node:os';
import { freeMemory } from './free-memory';
import type { FromChild, TaskInput, TaskName, TaskOutput, ToChild } from './tasks';
import { composeStrips } from './steps/compose-strips';
import { assessRehearsal } from './steps/assess-rehearsal';
import { detectChunk } from './steps/detect-chunk';
import { indexStack, inspectStack } from './steps/inspect-stack';
import { linkTracks } from './steps/link-tracks';
import { judgeTracks, measureFlow, measureFlowPart } from './steps/measure-flow';
import { measureImage } from './steps/measure-image';
import { simulateStack } from './steps/simulate-stack';
import { refinePoint } from './steps/refine-point';
import { tryRecipe } from './steps/try-recipe';
import type { WorkContext } from './steps/work-context';

type Work = { [K in TaskName]: (input: TaskInput<K>, context: WorkContext) => Promise<TaskOutput<K>> };

const WORK: Work = {
  indexStack,
  inspectStack,
  measureImage,
  detectChunk,
  linkTracks,
  measureFlow,
  judgeTracks,
  measureFlowPart,
  tryRecipe,
  composeStrips,
  simulateStack,
  assessRehearsal,
  refinePoint,
};

/** Progress is told so often at most, ms. */
const TELL_MS = 200;

const MICRO = 1e-6;

/**
 * After these a process may keep much memory that it no longer uses: millions of small arrays leave its allocator with
 * room between what is still in use, which never goes back to the system.
 */
const LEAVES_ROOM: readonly TaskName[] = [
  'inspectStack',
  'linkTracks',
  'judgeTracks',
  'measureFlowPart',
  'measureFlow',
];
/** A process that has grown by more since its start, MB, is done with once such a task is over. */
const GROWTH_MOST_MB = 40;
let startedMB = 0;
const residentMB = (): number => process.memoryUsage.rss() / 2 ** 20;

function isSpent(task: TaskName): boolean {
  if (!LEAVES_ROOM.includes(task) || residentMB() - startedMB < GROWTH_MOST_MB) return false;
  freeMemory();
  return residentMB() - startedMB > GROWTH_MOST_MB;
}

/** Web server and database come first on a busy machine: nobody clicks on a computation. */
const NICE = 5;

/** The main program of a child process: one computation after the other, until the parent is gone. */
export function serveComputations(): void {
  setPriority(NICE);
  startedMB = residentMB();
  process.on('disconnect', () => process.exit(0));
  // Ctrl-C reaches the whole group; the parent decides what becomes of its children.
  process.on('SIGINT', () => undefined);
  process.on('message', (message) => void serve(message as ToChild));
}

async function serve({ id, task, input }: ToChild): Promise<void> {
  let told = 0;
  const onProgress = (share: number) => {
    const now = performance.now();
    if (now - told < TELL_MS) return;
    told = now;
    tell({ id, kind: 'progress', share });
  };
  const before = process.cpuUsage();
  freeMemory();
  try {
    const work = WORK[task] as (input: unknown, context: WorkContext) => Promise<TaskOutput<TaskName>>;
    const output = await work(input, { onProgress });
    const { user, system } = process.cpuUsage(before);
    tell({ id, kind: 'done', output, cpuS: MICRO * (user + system), spent: isSpent(task) });
  } catch (cause) {
    const { name, message, stack, field } = cause as Error & { field?: string };
    tell({ id, kind: 'failed', error: { name, message, stack, field } });
  }
}

function tell(message: FromChild): void {
  process.send?.(message, undefined, undefined, (error: Error | null) => {
    if (error) process.exit(1);
  });
}

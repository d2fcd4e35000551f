import { join } from 'node:path';
import { limit, rootDir } from '@/lib/env';
import { ComputeChild } from './compute-child';
import { ComputeError } from './compute-error';
import type { TaskInput, TaskName, TaskOutput } from './tasks';

export interface RunOptions {
  /** Aborting ends the child that does the work, at once. */
  signal?: AbortSignal;
  /** Time that the child may go without telling progress, ms. */
  timeoutMs?: number;
  /** Share done, 0..1. */
  onProgress?: (share: number) => void;
  /** Told at the end the processor time that the child took, s. */
  onCpu?: (cpuS: number) => void;
  /** A child that did work with the same key before is preferred: it may still hold what was measured. */
  key?: string;
}

export interface PoolOptions {
  /** Bundle of the child process; by default the one of the production build. */
  childPath?: string;
  memoryMB?: number;
  /** Idle children end after this time, ms. */
  idleMs?: number;
  /** Work that may wait for a free child; more is refused. */
  waitingMost?: number;
}

interface Waiting {
  start(child: ComputeChild): void;
  key?: string;
}

const IDLE_MS = 60_000;
const TIMEOUT_MS = 10 * 60_000;

/**
 * Runs computations in at most `size` child processes, so that a hang, a crash or a full memory
 * costs one computation and never the process that asked. Children start when there is work and
 * are kept warm between pieces of work.
 */
export class ComputePool {
  private readonly children = new Set<ComputeChild>();
  private readonly waiting: Waiting[] = [];
  private closed = false;

  constructor(
    private readonly size: number,
    private readonly options: PoolOptions = {},
  ) {}

  /**
   * @throws ComputeError with its code and a sentence; `BUSY` at once when too much work waits.
   */
  async run<K extends TaskName>(
    task: K,
    input: TaskInput<K>,
    { signal, timeoutMs = TIMEOUT_MS, onProgress, onCpu, key }: RunOptions = {},
  ): Promise<TaskOutput<K>> {
    if (signal?.aborted) throw new ComputeError('STOPPED', 'Stopped.');
    const child = await this.borrow(key, signal);
    try {
      // Called off while it waited: nobody would tell the child any more.
      if (signal?.aborted) throw new ComputeError('STOPPED', 'Stopped.');
      child.lastKey = key;
      return await child.run(task, input, { signal, timeoutMs, onProgress, onCpu });
    } finally {
      this.giveBack(child);
    }
  }

  /** Ends all children; work under way fails. */
  async close(): Promise<void> {
    this.closed = true;
    await Promise.all(Array.from(this.children, (child) => child.kill()));
    this.children.clear();
  }

  private borrow(key: string | undefined, signal: AbortSignal | undefined): Promise<ComputeChild> {
    const idle = Array.from(this.children).filter((child) => child.idle);
    const known = idle.find((child) => key !== undefined && child.lastKey === key);
    if (known) return Promise.resolve(known.take());
    if (this.children.size < this.size) return Promise.resolve(this.startChild().take());
    if (idle.length > 0) return Promise.resolve(idle[0].take());
    if (this.waiting.length >= (this.options.waitingMost ?? Infinity)) {
      throw new ComputeError('BUSY', 'Too much is being computed just now. Try again in a few seconds.');
    }
    return new Promise((resolve, reject) => {
      const entry: Waiting = {
        key,
        start: (child) => (signal?.removeEventListener('abort', leave), resolve(child)),
      };
      const leave = () => {
        this.waiting.splice(this.waiting.indexOf(entry), 1);
        reject(new ComputeError('STOPPED', 'Stopped.'));
      };
      signal?.addEventListener('abort', leave, { once: true });
      this.waiting.push(entry);
    });
  }

  private giveBack(child: ComputeChild): void {
    child.release(this.options.idleMs ?? IDLE_MS, () => this.children.delete(child));
    if (!child.alive) this.children.delete(child);
    const next = this.waiting.shift();
    if (!next || this.closed) return;
    next.start((child.alive ? child : this.startChild()).take());
  }

  private startChild(): ComputeChild {
    const path = this.options.childPath ?? process.env.BEADLINE_COMPUTE_CHILD ?? builtChild();
    const child = new ComputeChild(path, this.options.memoryMB ?? limit('childMemoryMB'));
    this.children.add(child);
    return child;
  }
}

// Named through a variable so that a bundler of the web server doesn't follow the path.
function builtChild(): string {
  const bundle = 'compute-child.mjs';
  return join(rootDir(), 'dist', bundle);
}

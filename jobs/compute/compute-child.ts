import { spawn, type ChildProcess } from 'node:child_process';
import { ComputeError } from './compute-error';
import { engineFlags } from './engine-flags';
import { residentMB } from './resident-memory';
import type { FromChild, TaskInput, TaskName, TaskOutput, ToChild } from './tasks';

interface Current {
  id: number;
  resolve(output: TaskOutput<TaskName>): void;
  reject(error: ComputeError): void;
  onProgress?: (share: number) => void;
  onCpu?: (cpuS: number) => void;
  alive(): void;
}

interface ChildRunOptions {
  signal?: AbortSignal;
  timeoutMs: number;
  onProgress?: (share: number) => void;
  onCpu?: (cpuS: number) => void;
}

/** What a child may know of the machine; the address of the database and keys are not among it. */
const ENVIRONMENT = [
  'PATH',
  'LANG',
  'LC_ALL',
  'TZ',
  'TMPDIR',
  'NODE_ENV',
  'BEADLINE_CODE_VERSION',
  'BEADLINE_ROOT',
  'BEADLINE_KERNELS',
];

const MEMORY_LOOK_MS = 500;
const STDERR_KEPT = 4000;

/** The parent's end of one child process that computes one thing at a time. */
export class ComputeChild {
  private readonly process: ChildProcess;
  private current: Current | null = null;
  private count = 0;
  private stderr = '';
  private taken = false;
  private idleTimer: NodeJS.Timeout | undefined;
  private overMemory = false;
  private spent = false;
  alive = true;
  lastKey: string | undefined;

  constructor(
    path: string,
    private readonly memoryMB: number,
  ) {
    const heapMB = Math.max(64, Math.floor(memoryMB * 0.75));
    this.process = spawn(process.execPath, [...engineFlags(heapMB), path], {
      stdio: ['ignore', 'ignore', 'pipe', 'ipc'],
      serialization: 'advanced',
      env: Object.fromEntries(ENVIRONMENT.flatMap((name) => (process.env[name] ? [[name, process.env[name]]] : []))) as NodeJS.ProcessEnv, // prettier-ignore
    });
    this.process.on('message', (message) => this.receive(message as FromChild));
    this.process.stderr?.on('data', (data: Buffer) => {
      this.stderr = (this.stderr + data.toString()).slice(-STDERR_KEPT);
    });
    this.process.on('error', (cause) => this.ended(null, null, cause));
    this.process.on('exit', (code, signal) => this.ended(code, signal));
    const watch = setInterval(() => this.lookAtMemory(), MEMORY_LOOK_MS);
    watch.unref();
    this.process.on('exit', () => clearInterval(watch));
  }

  get idle(): boolean {
    return this.alive && !this.taken;
  }

  take(): this {
    this.taken = true;
    clearTimeout(this.idleTimer);
    this.process.ref();
    this.process.channel?.ref();
    return this;
  }

  /**
   * Back to idle; an idle child does not keep its parent from ending, and ends itself after a while. One that has said
   * that it keeps memory it can't give back ends at once.
   */
  release(idleMs: number, gone: () => void): void {
    this.taken = false;
    if (!this.alive) return;
    if (this.spent) return void this.kill();
    this.process.unref();
    this.process.channel?.unref();
    (this.process.stderr as unknown as { unref?: () => void } | null)?.unref?.();
    this.idleTimer = setTimeout(() => (gone(), void this.kill()), idleMs);
    this.idleTimer.unref();
  }

  run<K extends TaskName>(task: K, input: TaskInput<K>, options: ChildRunOptions): Promise<TaskOutput<K>> {
    const { signal, timeoutMs, onProgress, onCpu } = options;
    return new Promise<TaskOutput<K>>((resolve, reject) => {
      let timer: NodeJS.Timeout | undefined;
      const settle = () => {
        clearTimeout(timer);
        signal?.removeEventListener('abort', stop);
        this.current = null;
      };
      const end = (error: ComputeError) => (settle(), reject(error), void this.kill());
      const stop = () => end(new ComputeError('STOPPED', 'Stopped.'));
      const watch = () => {
        clearTimeout(timer);
        const seconds = Math.round(timeoutMs / 1000);
        const sentence = `The computation made no progress for ${seconds} s and was ended.`;
        timer = setTimeout(() => end(new ComputeError('TIMEOUT', sentence)), timeoutMs);
      };
      const id = ++this.count;
      this.current = {
        id,
        resolve: (output) => (settle(), resolve(output as TaskOutput<K>)),
        reject: (error) => (settle(), reject(error)),
        onProgress,
        onCpu,
        alive: watch,
      };
      signal?.addEventListener('abort', stop, { once: true });
      watch();
      this.process.send({ id, task, input } as ToChild, (error) => {
        if (error)
          this.current?.reject(
            new ComputeError('CRASHED', 'The computation could not be started.', { cause: error }),
          );
      });
    });
  }

  /** Ends the process and waits until it is gone. */
  kill(): Promise<void> {
    if (!this.alive) return Promise.resolve();
    this.alive = false;
    // Whoever waits for the end must not run out of things to wait for.
    this.process.ref();
    const gone = new Promise<void>((resolve) => this.process.once('exit', () => resolve()));
    this.process.kill('SIGKILL');
    this.current?.reject(new ComputeError('STOPPED', 'Stopped.'));
    return gone;
  }

  private receive(message: FromChild): void {
    const current = this.current;
    if (!current || message.id !== current.id) return;
    current.alive();
    if (message.kind === 'progress') return current.onProgress?.(message.share);
    if (message.kind === 'done') {
      current.onCpu?.(message.cpuS);
      this.spent = message.spent;
      return current.resolve(message.output);
    }
    const { name, message: sentence, stack, field } = message.error;
    const code = name === 'RecipeRangeError' ? 'RECIPE' : 'FAULT';
    const error = new ComputeError(code, sentence, { field });
    // The trace of where it happened, in the child, is the one that helps.
    if (stack) error.stack = stack;
    current.reject(error);
  }

  private ended(code: number | null, signal: NodeJS.Signals | null, cause?: Error): void {
    this.alive = false;
    clearTimeout(this.idleTimer);
    const outOfMemory = this.overMemory || this.stderr.includes('heap out of memory');
    const error = outOfMemory
      ? new ComputeError('MEMORY', `Needs more memory than allowed (${memoryText(this.memoryMB)}).`)
      : new ComputeError('CRASHED', `The computing process ended by itself (${signal ?? `exit ${code}`}).`, {
          cause: cause ?? this.stderr,
        });
    this.current?.reject(error);
  }

  // Arrays of numbers lie outside the heap that Node can bound by itself.
  private lookAtMemory(): void {
    const usedMB = this.process.pid && this.alive ? residentMB(this.process.pid) : null;
    if (usedMB === null || usedMB <= this.memoryMB) return;
    this.overMemory = true;
    this.process.kill('SIGKILL');
  }
}

const memoryText = (megabytes: number): string =>
  megabytes >= 1024 ? `${Number((megabytes / 1024).toFixed(1))} GB` : `${megabytes} MB`;

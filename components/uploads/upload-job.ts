import { formatBytesOf } from '@/lib/format/bytes';
import { SpeedMeter } from '@/lib/uploads/speed';
import type { Sending } from './send-file';
import type { UploadItem } from './upload-item';

const TRYING_AGAIN = 'Nothing gets through at the moment; it is tried again.';

/** What a job tells its queue. */
export type Tell = (change: Partial<UploadItem>) => void;

/** One row of the panel at work: a file, or all files of a folder. */
export abstract class UploadJob {
  protected readonly sendings = new Set<Sending>();
  protected readonly stop = new AbortController();
  private readonly meter = new SpeedMeter();
  private held = false;
  private wakers: (() => void)[] = [];

  constructor(
    protected item: UploadItem,
    private readonly tell: Tell,
    private readonly now: () => number = () => Date.now(),
  ) {}

  /** Runs to the end of the upload; the queue starts it when there is room. */
  abstract run(): Promise<void>;

  pause(): void {
    this.held = true;
    this.meter.reset();
    for (const sending of this.sendings) sending.pause();
    this.say({ state: 'paused', message: null, bytesPerS: null, secondsLeft: null });
  }

  resume(): void {
    this.held = false;
    this.say({ state: 'sending', message: null });
    for (const sending of this.sendings) sending.resume();
    this.wake();
  }

  /** Gives the upload up: the server drops what it has. */
  async end(): Promise<void> {
    this.stop.abort();
    this.wake();
    await Promise.all([...this.sendings].map((sending) => sending.end()));
  }

  /** Waits while the upload is paused; returns at once when it is not, or when it was given up. */
  protected async whileHeld(): Promise<void> {
    while (this.held && !this.stop.signal.aborted) {
      await new Promise<void>((resolve) => this.wakers.push(resolve));
    }
  }

  private wake(): void {
    const wakers = this.wakers;
    this.wakers = [];
    for (const go of wakers) go();
  }

  protected say(change: Partial<UploadItem>): void {
    this.item = { ...this.item, ...change };
    this.tell(change);
  }

  protected sayBytes(sentBytes: number): void {
    const nowMs = this.now();
    this.meter.add(sentBytes, nowMs);
    this.say({
      sentBytes,
      bytesPerS: this.meter.bytesPerS(nowMs),
      secondsLeft: this.meter.secondsLeft(this.item.bytes, nowMs),
      ...(this.item.message === TRYING_AGAIN ? { message: null } : {}),
    });
  }

  /** Nothing gets through at the moment: a speed would be a claim. */
  protected sayRetry(): void {
    this.meter.reset();
    if (!this.held) this.say({ bytesPerS: null, secondsLeft: null, message: TRYING_AGAIN });
  }

  /** The link is lost: nothing more is sent until the person, or the returning link, says so. */
  protected holdLost(): void {
    if (this.stop.signal.aborted || this.held) return;
    this.held = true;
    this.meter.reset();
    const { sentBytes, bytes } = this.item;
    const message = `The link was lost at ${formatBytesOf(sentBytes, bytes)}. Everything sent so far is kept; Resume continues there.`;
    this.say({ state: 'paused', message, bytesPerS: null, secondsLeft: null });
  }

  protected fail(error: unknown): void {
    if (this.stop.signal.aborted) return;
    this.meter.reset();
    const quiet = { bytesPerS: null, secondsLeft: null };
    const reason = error instanceof Error ? error.message : String(error);
    this.say({ ...quiet, state: 'failed', message: reason });
  }
}

import { ApiError } from '@/components/data/api-client';
import type { CorrectionInput } from '@/lib/schemas/correction';
import type { EditLog } from './edit-log';
import type { StoredCorrection } from './stored-correction';
import type { Gesture } from './gesture';
import type { MarksAnswer } from './local-marks';
import type { GestureStore } from './kept-gestures';

/** What the server says after storing a gesture. */
export interface StoredAnswer {
  revision: number;
  /** Next free number of a track after it. */
  nextNumber: number;
  corrections: StoredCorrection[];
}

/** The corrections since a revision. */
export interface LogAnswer {
  revision: number;
  nextNumber: number;
  corrections: StoredCorrection[];
}

/** The server's side. */
export interface CorrectionsApi {
  append(gesture: Gesture, corrections: readonly CorrectionInput[], revision: number): Promise<StoredAnswer>;
  since(revision: number): Promise<LogAnswer>;
  /** Marks of lines that are in force. */
  marks(): Promise<MarksAnswer>;
  /** Who has signed the analysis off; null while it can be changed. */
  closedBy(): Promise<string | null>;
}

/** How the link is; `held` while something is wrong that only the person can mend. */
export type LinkState =
  | { kind: 'idle' }
  | { kind: 'sending' }
  | { kind: 'lost'; waiting: number }
  | { kind: 'held'; reason: string };

export interface SenderEvents {
  onLink(state: LinkState): void;
  /** Someone else's corrections came in, or tracks got their numbers. */
  onChange(change: {
    foreign: StoredCorrection[];
    renumbered: Map<number, number>;
    /** Something was taken back that can't be shown from what is here. */
    unseen: boolean;
  }): void;
  /** Gestures were set aside. */
  onAside(): void;
  /** The analysis can't be changed any more. */
  onClosed(by: string): void;
}

/** Waits between tries while the link is lost, ms; the last one goes on. */
const WAITS_MS = [500, 1_000, 2_000, 4_000, 8_000, 15_000];

/**
 * Sends gestures one after the other, in the order in which they were made, each until the server has
 * answered. What the server refuses because someone was quicker is fitted to what is there now and
 * sent again.
 */
export class GestureSender {
  private running = false;
  private closed = false;
  private failures = 0;
  private wake: (() => void) | null = null;

  constructor(
    private readonly log: EditLog,
    private readonly api: CorrectionsApi,
    private readonly store: GestureStore,
    private readonly events: SenderEvents,
    private readonly sleep: (ms: number, wake: (wakeUp: () => void) => void) => Promise<void> = pause,
  ) {}

  /** Sends what waits; to be called whenever something was made or the link may be back. */
  async kick(): Promise<void> {
    this.wake?.();
    if (this.running || this.closed) return;
    this.running = true;
    try {
      while (this.log.pending.length > 0 && !this.closed) {
        if (!(await this.sendNext())) return;
      }
      if (!this.closed) this.events.onLink({ kind: 'idle' });
    } finally {
      this.running = false;
    }
  }

  /** Sends again after it was closed. */
  open(): void {
    this.closed = false;
  }

  close(): void {
    this.closed = true;
    this.wake?.();
  }

  /** Asks what others have done since. @returns whether the server answered */
  async catchUp(): Promise<boolean> {
    try {
      await this.takeIn(await this.api.since(this.log.revision));
      return true;
    } catch (error) {
      if (isLost(error)) return false;
      throw error;
    }
  }

  /** @returns false when sending has to stop until the next kick. */
  private async sendNext(): Promise<boolean> {
    const next = this.log.next();
    if (!next) return false;
    const { gesture, corrections } = next;
    this.events.onLink(this.failures > 0 ? this.lost() : { kind: 'sending' });
    try {
      const answer = await this.api.append(gesture, corrections, this.log.revision);
      this.failures = 0;
      await this.stored(gesture, answer);
      return true;
    } catch (error) {
      return this.failed(gesture, error);
    } finally {
      this.log.landed();
    }
  }

  private async stored(gesture: Gesture, answer: StoredAnswer): Promise<void> {
    const made = answer.corrections.flatMap(({ made: number }) => (number === null ? [] : [number]));
    const first = answer.corrections[0].id;
    const renumbered = this.log.stored(gesture.id, answer.revision, first, made);
    this.log.nextNumber = Math.max(this.log.nextNumber, answer.nextNumber);
    await this.store.delete(gesture.id).catch(() => undefined);
    const unseen = gesture.corrections.some(({ kind }) => kind === 'undo') && !this.log.shows(gesture.id);
    this.events.onChange({ foreign: [], renumbered, unseen });
  }

  private async failed(gesture: Gesture, error: unknown): Promise<boolean> {
    if (!(error instanceof ApiError)) throw error;
    if (isLost(error)) {
      this.failures += 1;
      this.events.onLink(this.lost());
      await this.sleep(WAITS_MS[Math.min(this.failures, WAITS_MS.length) - 1], (wake) => (this.wake = wake));
      this.wake = null;
      return true;
    }
    if (error.status === 412) return this.catchUpThenGoOn();
    if (error.status === 401 || error.status === 403) {
      this.events.onLink({ kind: 'held', reason: error.message });
      return false;
    }
    if (error.code === 'STATE') {
      for (const { id } of [...this.log.pending]) this.log.setAside(id, error.message, false);
      this.events.onAside();
      const by = await this.api.closedBy().catch(() => null);
      if (by !== null) this.events.onClosed(by);
      return false;
    }
    this.log.setAside(gesture.id, error.message, error.status === 422);
    this.events.onAside();
    return true;
  }

  private async catchUpThenGoOn(): Promise<boolean> {
    try {
      if (await this.catchUp()) return true;
    } catch (error) {
      if (!(error instanceof ApiError)) throw error;
      this.events.onLink({ kind: 'held', reason: error.message });
      return false;
    }
    this.failures += 1;
    this.events.onLink(this.lost());
    return true;
  }

  private async takeIn({ revision, nextNumber, corrections }: LogAnswer): Promise<void> {
    const own = new Set(this.log.pending.map(({ id }) => id));
    const seen = this.log.revision;
    const renumbered = new Map<number, number>();
    let landed = false;
    // An answer that was lost on its way: the gesture is there, and must not be sent again.
    for (const id of own) {
      const mine = corrections.filter(({ gesture }) => gesture === id);
      if (mine.length === 0) continue;
      landed = true;
      const made = mine.flatMap(({ made: number }) => (number === null ? [] : [number]));
      const { revision: at } = mine[mine.length - 1];
      for (const [from, to] of this.log.stored(id, at, mine[0].id, made)) renumbered.set(from, to);
      await this.store.delete(id).catch(() => undefined);
    }
    // What came in meanwhile by another way is not news, and one's own never is.
    const foreign = corrections.filter(
      ({ gesture, revision: at }) =>
        at > seen && (gesture === null || !(own.has(gesture) || this.log.knows(gesture))),
    );
    const aside = this.log.foreign(foreign, revision, nextNumber);
    if (foreign.length > 0 || landed) this.events.onChange({ foreign, renumbered, unseen: false });
    if (aside.length > 0) this.events.onAside();
  }

  private lost(): LinkState {
    return { kind: 'lost', waiting: this.log.pending.length };
  }
}

/** No answer came, or one that says nothing about the request: it may be tried again. */
const isLost = (error: unknown): boolean =>
  error instanceof ApiError &&
  (error.status === 0 ||
    error.status >= 500 ||
    error.status === 429 ||
    error.code === 'IDEMPOTENCY_CONFLICT');

function pause(ms: number, onWake: (wakeUp: () => void) => void): Promise<void> {
  return new Promise((resolve) => {
    const timer = setTimeout(resolve, ms);
    onWake(() => {
      clearTimeout(timer);
      resolve();
    });
  });
}

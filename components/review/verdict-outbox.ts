import { ApiError, LINK_LOST } from '@/components/data/api-client';
import type { Verdict } from '@/lib/review/verdict-words';

/** A verdict on its way to the server. */
export interface OutboxItem {
  id: string;
  candidateId: string;
  event: number;
  verdict: Verdict;
  reason: string | null;
  note: string | null;
  /** Revision that it starts from: the same at each try, so that the server can tell a repetition. */
  revision: number;
  /** Verdicts of this person on the candidate before this one. */
  steps: number;
}

export interface RefusedItem extends OutboxItem {
  sentence: string;
}

export interface OutboxState {
  waiting: readonly OutboxItem[];
  refused: readonly RefusedItem[];
  /** Why nothing is leaving; null while all is well. */
  trouble: string | null;
}

/** This person's verdict as the server holds it. */
export interface HeldVerdict extends Pick<OutboxItem, 'reason' | 'note' | 'revision' | 'steps'> {
  verdict: Verdict | null;
}

interface Options {
  /** Outlives the page: what is kept here is sent by the next one. */
  storage: Pick<Storage, 'getItem' | 'setItem'>;
  /** Of the person and laboratory. */
  key: string;
  send: (item: OutboxItem) => Promise<unknown>;
  /** What the server holds of this person's verdict, to tell a repetition from a change made elsewhere. */
  current: (candidateId: string) => Promise<HeldVerdict>;
  /** One page at a time sends; without such a lock all may, since the server tells repetitions. */
  exclusive?: (work: () => Promise<void>) => Promise<void>;
  wait?: (ms: number) => Promise<void>;
}

const FIRST_PAUSE_MS = 1_000;
const LONGEST_PAUSE_MS = 30_000;

/**
 * Verdicts that the server has not acknowledged: kept in the browser before anything is sent, sent in their order, and
 * sent again until an answer comes. What the server refuses for good is set aside with its sentence, never dropped.
 */
export class VerdictOutbox {
  private listeners = new Set<() => void>();
  private trouble: string | null = null;
  private sending: Promise<void> | null = null;
  private wake: (() => void) | null = null;
  private closed = false;
  private snapshot: OutboxState;

  constructor(private readonly options: Options) {
    this.snapshot = { ...this.read(), trouble: null };
  }

  readonly subscribe = (listener: () => void): (() => void) => {
    this.listeners.add(listener);
    return () => this.listeners.delete(listener);
  };
  readonly state = (): OutboxState => this.snapshot;

  /** Verdicts on a candidate that are still to be stored: the revision grows by so many. */
  pendingOf(candidateId: string): number {
    return this.read().waiting.filter((item) => item.candidateId === candidateId).length;
  }

  add(item: OutboxItem): void {
    const { waiting, refused } = this.read();
    this.write({ waiting: [...waiting, item], refused });
    this.flush();
  }

  /** Forgets what was refused, once its person has read why. */
  dismiss(id: string): void {
    const { waiting, refused } = this.read();
    this.write({ waiting, refused: refused.filter((item) => item.id !== id) });
  }

  /** Sends what waits; does nothing while that is under way, except to end a pause. */
  flush(): void {
    this.wake?.();
    this.sending ??= (this.options.exclusive ?? ((work) => work()))(() => this.sendAll())
      .catch(() => undefined)
      .finally(() => {
        this.sending = null;
        // Something may have come in between the last look and now.
        if (!this.closed && this.trouble === null && this.read().waiting.length > 0) this.flush();
      });
  }

  /** Resolves when nothing is being sent. */
  async idle(): Promise<void> {
    while (this.sending) await this.sending;
  }

  close(): void {
    this.closed = true;
    this.wake?.();
  }

  private async sendAll(): Promise<void> {
    let pauseMs = FIRST_PAUSE_MS;
    for (;;) {
      const [item] = this.read().waiting;
      if (!item || this.closed) return;
      try {
        await this.options.send(item);
        this.settle(item, null);
        pauseMs = FIRST_PAUSE_MS;
      } catch (error) {
        const known = error instanceof ApiError ? error : null;
        if (known && isFinal(known)) {
          if (known.code === 'CONFLICT') await this.resolve(item, known);
          else this.settle(item, known.message);
          continue;
        }
        this.tell(troubleOf(known));
        await this.pause(pauseMs);
        pauseMs = Math.min(LONGEST_PAUSE_MS, 2 * pauseMs);
      }
    }
  }

  /**
   * The revision had moved on: because the answer to this very verdict was lost; or because the candidate itself has
   * changed, as when tracks were measured anew, and then it is sent again; or because the person judged elsewhere.
   */
  private async resolve(item: OutboxItem, refusal: ApiError): Promise<void> {
    const held = await this.options.current(item.candidateId).catch(() => null);
    if (held === null) {
      this.tell(troubleOf(null));
      return this.pause(FIRST_PAUSE_MS);
    }
    const stored = held.verdict === item.verdict && held.reason === item.reason && held.note === item.note;
    if (stored && held.steps > item.steps) return this.settle(item, null);
    if (held.steps !== item.steps || held.revision === item.revision) {
      const elsewhere = held.steps !== item.steps;
      return this.settle(
        item,
        elsewhere ? 'You judged it elsewhere meanwhile, and that stands.' : refusal.message,
      );
    }
    const { waiting, refused } = this.read();
    const moved = { ...item, revision: held.revision };
    this.write({ waiting: waiting.map((one) => (one.id === item.id ? moved : one)), refused });
  }

  private settle(item: OutboxItem, refusal: string | null): void {
    const { waiting, refused } = this.read();
    const rest = waiting.filter(({ id }) => id !== item.id);
    this.trouble = null;
    this.write({
      waiting: rest,
      refused: refusal === null ? refused : [...refused, { ...item, sentence: refusal }],
    });
  }

  private pause(ms: number): Promise<void> {
    const wait = this.options.wait ?? ((time) => new Promise((resolve) => setTimeout(resolve, time)));
    return Promise.race([
      wait(ms),
      new Promise<void>((resolve) => {
        this.wake = resolve;
      }),
    ]).finally(() => {
      this.wake = null;
    });
  }

  private tell(trouble: string | null): void {
    this.trouble = trouble;
    this.publish(this.read());
  }

  private read(): Pick<OutboxState, 'waiting' | 'refused'> {
    try {
      const kept = JSON.parse(this.options.storage.getItem(this.options.key) ?? '{}') as Partial<OutboxState>;
      return { waiting: kept.waiting ?? [], refused: kept.refused ?? [] };
    } catch {
      return { waiting: [], refused: [] };
    }
  }

  private write(kept: Pick<OutboxState, 'waiting' | 'refused'>): void {
    this.options.storage.setItem(this.options.key, JSON.stringify(kept));
    this.publish(kept);
  }

  private publish(kept: Pick<OutboxState, 'waiting' | 'refused'>): void {
    this.snapshot = { ...kept, trouble: this.trouble };
    for (const listener of this.listeners) listener();
  }
}

/** Refusals that no further try would change. */
const isFinal = ({ status, code }: ApiError): boolean =>
  status >= 400 && status < 500 && ![401, 408, 423, 425, 429].includes(status) && code !== LINK_LOST;

function troubleOf(error: ApiError | null): string {
  if (error?.status === 401) {
    return 'Your session has ended. Your judgements are kept; sign in again to send them.';
  }
  return 'No link. Your judgements are kept and sent later.';
}

import { createHash } from 'node:crypto';
import { setTimeout as pause } from 'node:timers/promises';

/** Answers after which the same request may work a little later. */
const PASSING = new Set([408, 423, 425, 429, 500, 502, 503, 504, 507]);
const AGAIN_MS = 400;
/** So long nothing at all may work before it counts as broken, ms. */
const PATIENCE_MS = 180_000;
/** An answer that takes longer has been lost on the way. */
const ANSWER_MS = 60_000;

export const sha256 = (bytes: string | Uint8Array): string =>
  createHash('sha256').update(bytes).digest('hex');

/** The first request with this key may be at work still, or have died with its process a moment ago. */
const isPassing = ({ status, body }: { status: number; body: Buffer }): boolean =>
  PASSING.has(status) || (status === 409 && body.includes('is still at work'));

/** A script that doesn't give up while the server is away, as a good client does. */
export class PatientClient {
  /** Answers by status, lost ones as 0. */
  readonly statuses = new Map<number, number>();

  /** @param onFault hears of every answer that the server itself calls its own mistake (500) */
  constructor(
    private readonly origin: string,
    private readonly token: string,
    private readonly onFault: (sentence: string) => void = () => {},
  ) {}

  /** One try. @returns null when no answer came */
  async ask(
    path: string,
    init: RequestInit = {},
  ): Promise<{ status: number; headers: Headers; body: Buffer } | null> {
    const headers = new Headers(init.headers);
    headers.set('authorization', `Bearer ${this.token}`);
    try {
      const response = await fetch(new URL(path, this.origin), {
        ...init,
        headers,
        signal: AbortSignal.timeout(ANSWER_MS),
      });
      const body = Buffer.from(await response.arrayBuffer());
      this.note(response.status);
      if (response.status === 500) {
        this.onFault(`${init.method ?? 'GET'} ${path} was answered 500: ${body.toString().slice(0, 500)}`);
      }
      return { status: response.status, headers: response.headers, body };
    } catch {
      this.note(0);
      return null;
    }
  }

  /**
   * Tries until an answer comes that another try would not change.
   * @throws Error when none comes in three minutes
   */
  async askPatiently(path: string, init: RequestInit = {}) {
    const end = Date.now() + PATIENCE_MS;
    let last = 'no answer';
    for (;;) {
      const answer = await this.ask(path, init);
      if (answer && !isPassing(answer)) return answer;
      if (answer) last = `${answer.status} ${answer.body.toString().slice(0, 300)}`;
      if (Date.now() > end) {
        throw new Error(
          `${init.method ?? 'GET'} ${path} got no good answer in ${PATIENCE_MS / 1000} s: ${last}`,
        );
      }
      await pause(AGAIN_MS);
    }
  }

  async json<T>(path: string, init: RequestInit = {}): Promise<T> {
    const { status, body } = await this.askPatiently(path, init);
    if (status >= 400)
      throw new Error(`${init.method ?? 'GET'} ${path}: ${status} ${body.toString().slice(0, 300)}`);
    return JSON.parse(body.toString()) as T;
  }

  /** A POST whose effect happens once, however often it has to be sent. */
  post<T>(path: string, key: string, body: unknown): Promise<T> {
    const headers = { 'content-type': 'application/json', 'idempotency-key': key };
    return this.json<T>(path, { method: 'POST', headers, body: JSON.stringify(body) });
  }

  private note(status: number): void {
    this.statuses.set(status, (this.statuses.get(status) ?? 0) + 1);
  }
}

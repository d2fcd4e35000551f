import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { ApiError, LINK_LOST } from '@/components/data/api-client';
import { VerdictOutbox, type OutboxItem } from '@/components/review/verdict-outbox';

/** A browser's storage, which outlives the page. */
function makeStorage() {
  const held = new Map<string, string>();
  return { getItem: (key: string) => held.get(key) ?? null, setItem: (key: string, text: string) => void held.set(key, text) }; // prettier-ignore
}

/** A server that stores a verdict when its revision fits, as the API does, and loses what it is told to lose. */
class Server {
  readonly rows: Pick<OutboxItem, 'candidateId' | 'verdict' | 'reason' | 'note'>[] = [];
  /** For each request: `before`: it never arrives; `after`: its answer is lost. */
  constructor(private readonly losses: ('before' | 'after' | null)[] = []) {}

  /** Times that a candidate itself has changed. */
  changes = 0;
  stepsOf = (candidateId: string) => this.rows.filter((row) => row.candidateId === candidateId).length;
  revisionOf = (candidateId: string) => 1 + this.changes + this.stepsOf(candidateId);
  last = (candidateId: string) => this.rows.filter((row) => row.candidateId === candidateId).at(-1) ?? null;

  send = async ({ candidateId, verdict, reason, note, revision }: OutboxItem): Promise<void> => {
    const loss = this.losses.shift() ?? null;
    const lost = new ApiError(0, LINK_LOST, 'The link to the server was lost.');
    if (loss === 'before') throw lost;
    const now = this.revisionOf(candidateId);
    const held = this.last(candidateId);
    const same = held?.verdict === verdict && held.reason === reason && held.note === note;
    if (!(same && (revision === now || revision === now - 1))) {
      if (revision !== now) throw new ApiError(412, 'CONFLICT', 'Someone has changed this meanwhile.');
      this.rows.push({ candidateId, verdict, reason, note });
    }
    if (loss === 'after') throw lost;
  };
  current = async (candidateId: string) => {
    const { verdict = null, reason = null, note = null } = this.last(candidateId) ?? {};
    return {
      verdict,
      reason,
      note,
      revision: this.revisionOf(candidateId),
      steps: this.stepsOf(candidateId),
    };
  };
}

const item = (fields: Partial<OutboxItem>): OutboxItem => ({
  id: crypto.randomUUID(),
  candidateId: 'a',
  event: 1,
  verdict: 'yes',
  reason: null,
  note: null,
  revision: 1,
  steps: 0,
  ...fields,
});
const open = (
  server: Pick<ConstructorParameters<typeof VerdictOutbox>[0], 'send' | 'current'>,
  storage = makeStorage(),
) =>
  new VerdictOutbox({
    storage,
    key: 'k',
    send: server.send,
    current: server.current,
    wait: async () => undefined,
  });

describe('verdicts on their way', () => {
  it('none is lost or doubled whatever requests and answers are lost, in the order in which they were given', async () => {
    const losses = fc.array(fc.constantFrom('before' as const, 'after' as const, null), { maxLength: 30 });
    const acts = fc.array(fc.tuple(fc.constantFrom('a', 'b', 'c'), fc.constantFrom('yes' as const, 'no' as const, 'cannot-tell' as const)), { maxLength: 12 }); // prettier-ignore
    await fc.assert(
      fc.asyncProperty(losses, acts, async (lost, given) => {
        const server = new Server(lost);
        const outbox = open(server);
        const counts: Record<string, number> = {};
        const wanted = given.map(([candidateId, verdict], i) => {
          counts[candidateId] = (counts[candidateId] ?? 0) + 1;
          // Notes tell one act from the next, so that what is equal is the same act.
          const act = { candidateId, verdict, reason: null, note: String(i) };
          outbox.add(item({ ...act, revision: counts[candidateId], steps: counts[candidateId] - 1 }));
          return act;
        });
        await outbox.idle();
        expect(server.rows).toEqual(wanted);
        expect(outbox.state()).toEqual({ waiting: [], refused: [], trouble: null });
      }),
      { numRuns: 200 },
    );
  });

  it('a page that is closed before the answer leaves them to the next one', async () => {
    const storage = makeStorage();
    const never = {
      send: () => new Promise<void>(() => undefined),
      current: () => new Promise<never>(() => undefined),
    };
    open(never, storage).add(item({ verdict: 'no', reason: 'the spots merge' }));
    const server = new Server();
    const next = open(server, storage);
    expect(next.state().waiting).toHaveLength(1);
    next.flush();
    await next.idle();
    expect(server.rows).toMatchObject([{ verdict: 'no', reason: 'the spots merge' }]);
    expect(next.state().waiting).toEqual([]);
  });

  it('says what is wrong while the link is lost or the session ended, and goes on when it is back', async () => {
    for (const [error, words] of [
      [new ApiError(0, LINK_LOST, ''), 'No link. Your judgements are kept and sent later.'],
      [new ApiError(401, 'SIGNED_OUT', ''), 'Your session has ended. Your judgements are kept; sign in again to send them.'], // prettier-ignore
      [new ApiError(503, 'BUSY', ''), 'No link. Your judgements are kept and sent later.'],
    ] as const) {
      let fails = true;
      const server = new Server();
      const told: (string | null)[] = [];
      const outbox = new VerdictOutbox({
        storage: makeStorage(),
        key: 'k',
        send: (one) => (fails ? Promise.reject(error) : server.send(one)),
        current: server.current,
        wait: () => new Promise(() => undefined),
      });
      outbox.subscribe(() => told.push(outbox.state().trouble));
      outbox.add(item({}));
      while (told.at(-1) !== words) await new Promise((resolve) => setImmediate(resolve));
      expect(outbox.state().waiting).toHaveLength(1);
      fails = false;
      outbox.flush();
      await outbox.idle();
      expect(outbox.state()).toEqual({ waiting: [], refused: [], trouble: null });
    }
  });

  it('what is refused for good is set aside with its sentence and holds up nothing', async () => {
    const settled = new ApiError(409, 'STATE', 'The principal investigator has settled this candidate.');
    const server = new Server();
    const outbox = open({
      send: (one) => (one.candidateId === 'a' ? Promise.reject(settled) : server.send(one)),
      current: server.current,
    });
    outbox.add(item({}));
    outbox.add(item({ candidateId: 'b' }));
    await outbox.idle();
    expect(server.rows).toHaveLength(1);
    const [refused] = outbox.state().refused;
    expect(refused.sentence).toBe('The principal investigator has settled this candidate.');
    outbox.dismiss(refused.id);
    expect(outbox.state().refused).toEqual([]);
  });

  it('a candidate that was measured anew meanwhile takes the verdict at its new revision', async () => {
    const server = new Server(['after']);
    server.changes = 2;
    const outbox = open(server);
    outbox.add(item({}));
    outbox.add(item({ verdict: 'no', revision: 2, steps: 1 }));
    await outbox.idle();
    expect(server.rows.map(({ verdict }) => verdict)).toEqual(['yes', 'no']);
    expect(outbox.state().refused).toEqual([]);
  });

  it('a verdict that was changed elsewhere meanwhile is not overwritten', async () => {
    const server = new Server();
    server.rows.push({ candidateId: 'a', verdict: 'no', reason: null, note: null });
    const outbox = open(server);
    outbox.add(item({ revision: 1 }));
    await outbox.idle();
    expect(server.rows).toHaveLength(1);
    expect(outbox.state().refused[0].sentence).toBe('You judged it elsewhere meanwhile, and that stands.');
  });
});

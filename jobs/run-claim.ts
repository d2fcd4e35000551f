import { getSequelize } from '@/models/database';
import { isDatabaseAway, untilDatabaseIsBack } from '@/models/database-away';
import {
  endClaim,
  holdsClaim,
  lockClaim,
  LostClaimError,
  putBack,
  releaseClaim,
  renewClaim,
  type JobClaim,
} from '@/models/queries/job-claims';
import { ComputeError } from './compute/compute-error';
import type { ComputePool } from './compute/pool';
import {
  commitClaim,
  lockSubject,
  WAIT_FOR_DATABASE_MS,
  type JobContext,
  type JobHandler,
} from './job-context';
import type { JobSubject } from './job-definition';
import type { Say } from './say';
import { FinalFailure } from './final-failure';
import { withRetries } from '@/models/with-retries';

export interface ClaimTimes {
  /** Between two signs of life. */
  heartbeatMs: number;
  /** Between two looks whether the work was stopped. */
  lookMs: number;
  /** Pause before the second try; doubles with each further try. */
  backOffMs: number;
}

/** Work that drags the database down with it must end too. */
const ATTEMPTS_MOST = 30;

/** How the work on a claim ended. */
export type ClaimEnd = 'done' | 'put-back' | 'given-up' | 'lost' | 'released';

/**
 * Does one piece of work from claim to end: signs of life meanwhile, an eye on being stopped, and
 * the right ending for each kind of failure.
 * @param leaving aborts when the worker stops and the work must be given back.
 */
export async function runClaim(
  claim: JobClaim,
  handler: JobHandler,
  { pool, folder, leaving, times, say }: { pool: ComputePool; folder: string; leaving: AbortSignal; times: ClaimTimes; say: Say }, // prettier-ignore
): Promise<ClaimEnd> {
  const { subject, payload } = handler.definition;
  const checked = payload.parse(claim.payload);
  const ending = new AbortController();
  const abort = () => ending.abort();
  leaving.addEventListener('abort', abort, { once: true });
  let share = 0;
  const watch = watchClaim(claim, () => share, ending, times);
  const context: JobContext<Record<string, unknown>> = {
    claim,
    payload: checked,
    folder,
    signal: ending.signal,
    report: (done) => void (share = done),
    compute: (task, input, options) => pool.run(task, input, { signal: ending.signal, ...options }),
    commit: (write) => commitClaim(claim, subject, write),
  };
  try {
    if (leaving.aborted) abort();
    await handler.run(context);
    return 'done';
  } catch (cause) {
    if (cause instanceof LostClaimError) return 'lost';
    if (leaving.aborted) {
      await releaseClaim(claim);
      return 'released';
    }
    if (ending.signal.aborted) return 'lost';
    if (isDatabaseAway(cause) && claim.attempt < ATTEMPTS_MOST) {
      // Nobody's failure either: given back as soon as there is somebody to give it back to.
      await untilDatabaseIsBack(() => releaseClaim(claim), WAIT_FOR_DATABASE_MS);
      return 'released';
    }
    say('error', 'work failed', { job: claim.id, kind: claim.kind, attempt: claim.attempt, cause });
    return await endFailed(claim, handler, reasonOf(cause), times.backOffMs);
  } finally {
    await watch.stop();
    leaving.removeEventListener('abort', abort);
  }
}

function watchClaim(claim: JobClaim, share: () => number, ending: AbortController, times: ClaimTimes) {
  let lastSign = Date.now();
  let lastShare = 0;
  let looking: Promise<void> = Promise.resolve();
  const look = async () => {
    // People watch the progress, so news of it doesn't wait for the next sign of life.
    const now = share();
    const signDue = Date.now() - lastSign >= times.heartbeatMs || now !== lastShare;
    if (signDue) [lastSign, lastShare] = [Date.now(), now];
    const held = signDue ? await renewClaim(claim, now) : await holdsClaim(claim);
    if (!held) ending.abort();
  };
  let busy = false;
  const timer = setInterval(() => {
    if (busy) return;
    busy = true;
    // A database that is away for a moment must not end the work: the claim is checked again when writing.
    looking = look()
      .catch(() => undefined)
      .finally(() => void (busy = false));
  }, times.lookMs);
  return {
    async stop() {
      clearInterval(timer);
      await looking;
    },
  };
}

interface Reason {
  code: string;
  detail: string;
  /** Trying again can't help. */
  final: boolean;
}

/** What the system says where a disk is full, in this process or in a computing one. */
const DISK_FULL = /^ENOSPC\b/;

/** A failure in words for people. */
export function reasonOf(cause: unknown): Reason {
  if (cause instanceof Error && DISK_FULL.test(cause.message)) {
    const detail = 'The disk of the data folder is full. Free some room, then run it again.';
    return { code: 'STORAGE_FULL', detail, final: false };
  }
  if (cause instanceof ComputeError) {
    return {
      code: cause.code === 'RECIPE' ? 'PARAM_RANGE' : cause.code,
      detail: cause.message,
      final: cause.code === 'RECIPE',
    };
  }
  if (cause instanceof FinalFailure) return { code: cause.code, detail: cause.message, final: true };
  const detail = cause instanceof Error ? cause.message : String(cause);
  return { code: 'FAULT', detail, final: false };
}

/** Puts the work back for another try, or gives it up and passes the failure on to its subject. */
export async function endFailed(
  claim: JobClaim,
  handler: JobHandler,
  reason: Reason,
  backOffMs: number,
): Promise<ClaimEnd> {
  const { subject, pauseMs } = handler.definition;
  const givenUp = reason.final || claim.attempt >= claim.maxAttempts;
  try {
    await withRetries(() =>
      getSequelize().transaction(async (transaction) => {
        await lockSubject(subject, claim.subjectId, transaction);
        await lockClaim(claim, transaction);
        if (!givenUp) {
          const afterMs = pauseMs?.(claim.attempt) ?? backOffMs * 2 ** (claim.attempt - 1);
          return putBack(claim, { afterMs, code: reason.code, detail: reason.detail }, transaction);
        }
        const said = { code: reason.code, detail: givenUpSentence(claim, subject, reason) };
        await endClaim(claim, { state: 'failed', ...said }, transaction);
        await handler.onGivenUp(claim, said, transaction);
      }),
    );
  } catch (cause) {
    if (cause instanceof LostClaimError) return 'lost';
    throw cause;
  }
  return givenUp ? 'given-up' : 'put-back';
}

function givenUpSentence(claim: JobClaim, subject: JobSubject, { detail, final }: Reason): string {
  if (final) return detail;
  const times = claim.attempt === 1 ? 'once' : `${claim.attempt} times`;
  return `Failed ${times} while ${whileDoing(claim, subject)}: ${detail} (job ${claim.id})`;
}

const DOING: Record<string, string> = {
  'ingest-recording': 'checking the stack',
  'measure-image': 'measuring the image',
  'link-tracks': 'linking tracks',
  'measure-flow': 'measuring the flow',
  'remeasure-tracks': 'measuring corrected tracks',
  'send-mail': 'sending a mail',
  'check-files': 'checking stored files',
  'build-export': 'building a data package',
};

function whileDoing(claim: JobClaim, subject: JobSubject): string {
  if (claim.kind !== 'detect-spots') return DOING[claim.kind] ?? `working on the ${subject}`;
  const { firstFrame, frames } = claim.payload as { firstFrame: number; frames: number };
  return `detecting spots in frames ${firstFrame} to ${firstFrame + frames - 1}`;
}

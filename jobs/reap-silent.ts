import { silentClaims } from '@/models/queries/job-claims';
import type { JobHandler } from './job-context';
import { endFailed } from './run-claim';
import type { Say } from './say';

/**
 * Takes work back from workers that have been silent for `silenceMs`. The number of the attempt
 * stays as it is and rises with the next claim, so the silent worker can write nothing any more.
 */
export async function reapSilent(
  handlers: ReadonlyMap<string, JobHandler>,
  silenceMs: number,
  say: Say,
): Promise<number> {
  const silent = await silentClaims(silenceMs);
  for (const claim of silent) {
    const handler = handlers.get(claim.kind);
    if (!handler) continue;
    const reason = { code: 'WORKER_LOST', detail: 'The worker stopped answering.', final: false };
    const end = await endFailed(claim, handler, reason, 0);
    say('warn', 'took work back from a silent worker', {
      job: claim.id,
      kind: claim.kind,
      worker: claim.workerId,
      end,
    });
  }
  return silent.length;
}

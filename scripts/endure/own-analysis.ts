import { setTimeout as pause } from 'node:timers/promises';
import type { Random } from '@/tracking/random';
import { newId } from '@/lib/ids';
import { pick, type Load } from './load';
import type { ReferenceStack } from './stacks';

/** Longest that one piece of work may take with everything that goes wrong meanwhile, ms. */
const ENDS_WITHIN_MS = 300_000;
/** Between two looks for work that was given up, ms. */
const AGAIN_EVERY_MS = 5_000;

interface JobAnswer {
  id: string;
  subjectId: string;
  kind: string;
}

/** A piece of work that has lost three workers is given up, and a person asks for it again: here the administrator. */
export async function askAgain({ administrator, ledger }: Load, subjectId: string): Promise<void> {
  const { items } = await administrator.json<{ items: JobAnswer[] }>('/api/v1/jobs?state=failed&limit=200');
  const job = items.find((one) => one.subjectId === subjectId);
  if (!job) return;
  const { status } = await administrator.askPatiently(`/api/v1/jobs/${job.id}/again`, { method: 'POST' });
  if (status < 400) ledger.count(`work given up and asked for again: ${job.kind}`);
}

/**
 * Waits until what is at an address is as it must become; work for it that was given up is asked for again.
 * @returns what is there in the end; null when it has not become so in five minutes, which is a broken promise
 */
export async function untilIs<T>(
  load: Load,
  path: string,
  subjectId: string,
  is: (value: T) => boolean,
): Promise<T | null> {
  const end = Date.now() + ENDS_WITHIN_MS;
  let lookedAt = Date.now();
  for (;;) {
    const value = await load.client.json<T>(path);
    if (is(value)) return value;
    if (Date.now() > end) {
      const now = JSON.stringify(value).slice(0, 300);
      load.ledger.broken(`${path} has not come to its end in ${ENDS_WITHIN_MS / 1000} s: ${now}`);
      return null;
    }
    if (Date.now() - lookedAt > AGAIN_EVERY_MS) {
      lookedAt = Date.now();
      await askAgain(load, subjectId);
    }
    await pause(500);
  }
}

export interface OwnAnalysis {
  id: string;
  stack: ReferenceStack;
  recordingId: string;
}

/** A finished analysis that nobody else works on; null when there is no recording, or time, for one. */
export async function ownAnalysis(load: Load, random: Random): Promise<OwnAnalysis | null> {
  while (load.recordings.length === 0) {
    if (load.isOver()) return null;
    await pause(300);
  }
  const recording = pick(load.recordings, random);
  recording.asked += 1;
  const path = `/api/v1/recordings/${recording.id}/analyses`;
  const { id } = await load.client.post<{ id: string }>(path, newId(), { recipe: {} });
  const done = await untilIs<{ state: string }>(
    load,
    `/api/v1/analyses/${id}`,
    id,
    ({ state }) => state === 'done',
  );
  return done && { id, stack: recording.stack, recordingId: recording.id };
}

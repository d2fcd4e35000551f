import type { Verdict } from '@/lib/review/verdict-words';
import type { ReviewQueueView } from '@/lib/views/review-view';

export type QueueItem = ReviewQueueView['items'][number];

/** The way of one sitting: what was judged before in front, so that Back reaches it, then what waits. */
export interface Sitting {
  ids: string[];
  at: number;
  said: Record<string, Verdict>;
}

/** @param first a candidate to open with, where it is one of them */
export function beginSitting(items: readonly QueueItem[], first: string | null = null): Sitting {
  const judged = items.filter(({ own }) => own !== null);
  const waiting = items.filter(({ own, waits }) => own === null && waits);
  const others = items.filter(({ own, waits, id }) => own === null && !waits && id === first);
  const ids = [...judged, ...others, ...waiting].map(({ id }) => id);
  const said = Object.fromEntries(judged.map(({ id, own }) => [id, own!]));
  const wanted = first ? ids.indexOf(first) : -1;
  return { ids, at: wanted >= 0 ? wanted : judged.length + others.length, said };
}

/** The candidate shown; null at the end of the way. */
export const candidateAt = ({ ids, at }: Sitting): string | null => ids[at] ?? null;

/** Judged: on to the next that has no verdict, the one after this first. */
export function afterVerdict(sitting: Sitting, id: string, verdict: Verdict): Sitting {
  const said = { ...sitting.said, [id]: verdict };
  const { ids } = sitting;
  let at = sitting.at + 1;
  while (at < ids.length && said[ids[at]]) at++;
  return { ids, at, said };
}

/** Left for later: to the end of the way, where it waits. */
export function postpone(sitting: Sitting): Sitting {
  const { ids, at, said } = sitting;
  const id = ids[at];
  if (id === undefined) return sitting;
  if (said[id]) return { ids, at: Math.min(ids.length, at + 1), said };
  return { ids: [...ids.slice(0, at), ...ids.slice(at + 1), id], at, said };
}

export const goBack = (sitting: Sitting): Sitting => ({ ...sitting, at: Math.max(0, sitting.at - 1) });

/** Candidates to fetch ahead of their reader. */
export const comingUp = ({ ids, at, said }: Sitting, count: number): string[] =>
  ids
    .slice(at + 1)
    .filter((id) => !said[id])
    .slice(0, count);

export const judgedCount = ({ ids, said }: Sitting): number => ids.filter((id) => said[id]).length;

'use client';

import { useEffect, useSyncExternalStore } from 'react';
import { api } from '@/components/data/api-client';
import type { OwnVerdictView } from '@/lib/views/review-view';
import { VerdictOutbox, type OutboxState } from './verdict-outbox';

const path = (candidateId: string) => `/api/v1/candidates/${candidateId}/verdict`;
const EMPTY: OutboxState = { waiting: [], refused: [], trouble: null };

/** The outbox of this person in this laboratory; what an earlier page left in it is sent at once. */
export function useOutbox(owner: string): { outbox: VerdictOutbox; state: OutboxState } {
  const outbox = outboxOf(owner);
  useEffect(() => {
    outbox.flush();
    const flush = () => outbox.flush();
    window.addEventListener('online', flush);
    return () => window.removeEventListener('online', flush);
  }, [outbox]);
  const state = useSyncExternalStore(outbox.subscribe, outbox.state, () => EMPTY);
  return { outbox, state };
}

// One for as long as the site is open: it goes on sending while its person looks at other pages.
const open = new Map<string, VerdictOutbox>();

function outboxOf(owner: string): VerdictOutbox {
  const known = open.get(owner) ?? makeOutbox(owner);
  // The server renders for many people and sends for none.
  if (typeof window !== 'undefined') open.set(owner, known);
  return known;
}

function makeOutbox(owner: string): VerdictOutbox {
  const key = `beadline-verdicts-${owner}`;
  const storage =
    typeof window === 'undefined' ? { getItem: () => null, setItem: () => undefined } : localStorage;
  const locks = typeof navigator === 'undefined' ? undefined : navigator.locks;
  return new VerdictOutbox({
    storage,
    key,
    send: ({ candidateId, verdict, reason, note, revision }) =>
      api(path(candidateId), { method: 'PUT', body: { verdict, reason, note }, revision }),
    current: async (candidateId) => {
      const { verdict, reason, note, revision, history } = await api<OwnVerdictView>(path(candidateId));
      return { verdict, reason, note, revision, steps: history.length };
    },
    exclusive: locks ? (work) => locks.request(key, work).then(() => undefined) : undefined,
  });
}

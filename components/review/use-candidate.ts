'use client';

import { useCallback, useEffect, useMemo, useState } from 'react';
import { CandidateStore, type LoadedCandidate } from './candidate-store';

/** Candidates fetched ahead of the one that is shown. */
const AHEAD = 4;

interface Shown {
  id: string;
  loaded: LoadedCandidate | null;
  failure: string | null;
}

/**
 * The candidate to show, at once where it was fetched ahead, and the next ones on their way.
 * @param coming ids of those that follow, in order
 */
export function useCandidate(id: string | null, coming: readonly string[]) {
  const store = useMemo(() => new CandidateStore(), []);
  const [arrived, setArrived] = useState<Shown | null>(null);
  const [tries, setTries] = useState(0);
  const ready = id === null ? null : store.peek(id);
  useEffect(() => {
    if (id === null) return;
    let left = false;
    store.load(id).then(
      (loaded) => left || setArrived({ id, loaded, failure: null }),
      (error: unknown) =>
        left ||
        setArrived({ id, loaded: null, failure: error instanceof Error ? error.message : String(error) }),
    );
    return () => {
      left = true;
    };
  }, [store, id, tries]);
  const key = coming.slice(0, AHEAD).join(' ');
  useEffect(() => {
    if (!key) return;
    // Only once the candidate that is wanted now has been painted.
    let timer: ReturnType<typeof setTimeout> | undefined;
    const request = requestAnimationFrame(() => {
      timer = setTimeout(() => store.ahead(key.split(' ')), 0);
    });
    return () => {
      cancelAnimationFrame(request);
      clearTimeout(timer);
    };
  }, [store, key]);
  const current = arrived?.id === id ? arrived : null;
  const retry = useCallback(() => {
    setArrived(null);
    setTries((n) => n + 1);
  }, []);
  // What failed while the link was lost is asked for again by itself.
  const failed = current?.failure != null;
  useEffect(() => {
    if (!failed) return;
    window.addEventListener('online', retry);
    return () => window.removeEventListener('online', retry);
  }, [failed, retry]);
  return { loaded: ready ?? current?.loaded ?? null, failure: current?.failure ?? null, retry };
}

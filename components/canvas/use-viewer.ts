'use client';

import { useState, useSyncExternalStore } from 'react';
import { ViewerStore, type ViewerState } from './viewer-store';

/** One store for the life of the viewer. */
export function useViewerStore(
  frames: number,
  initial: { frame?: number; low: number; high: number },
): ViewerStore {
  const [store] = useState(() => new ViewerStore(frames, initial));
  return store;
}

/** One value of the viewer's state; the component renders again only when that value changes. */
export function useViewer<T extends string | number | boolean | null>(
  store: ViewerStore,
  pick: (state: ViewerState) => T,
): T {
  return useSyncExternalStore(
    store.subscribe,
    () => pick(store.get()),
    () => pick(store.get()),
  );
}

'use client';

import { useSyncExternalStore } from 'react';
import type { EditState, EditStore } from './edit-state';

/** One value of the editor's state; the component renders again only when that value changes. */
export function useEdit<T>(store: EditStore, pick: (state: EditState) => T): T {
  return useSyncExternalStore(
    store.subscribe,
    () => pick(store.get()),
    () => pick(store.get()),
  );
}

'use client';

import { useSyncExternalStore } from 'react';

let ended = false;
const listeners = new Set<() => void>();

function set(now: boolean): void {
  if (ended === now) return;
  ended = now;
  listeners.forEach((listener) => listener());
}

/** To be called with the code of each refusal: a session that has ended is told to the whole page. */
export function noticeRefusal(code: string | undefined): void {
  if (code === 'SIGNED_OUT') set(true);
}

/** Signed in again: forms may be sent again. */
export const sessionIsBack = (): void => set(false);

/** Whether the server has said that nobody is signed in here any more. */
export function useSessionEnded(): boolean {
  return useSyncExternalStore(
    (listener) => (listeners.add(listener), () => void listeners.delete(listener)),
    () => ended,
    () => false,
  );
}

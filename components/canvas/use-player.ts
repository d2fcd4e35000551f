'use client';

import { useCallback, useEffect, useState, useSyncExternalStore } from 'react';
import type { ViewerStore } from './viewer-store';

/** A picture that takes longer than this no longer holds up the others. */
const WAIT_MS = 1000;

const calm = '(prefers-reduced-motion: reduce)';
const watchCalm = (listener: () => void) => {
  const query = matchMedia(calm);
  query.addEventListener('change', listener);
  return () => query.removeEventListener('change', listener);
};

/** True where the person asked for as little motion as possible: frames then move by key press alone. */
export const useReducedMotion = () =>
  useSyncExternalStore(
    watchCalm,
    () => matchMedia(calm).matches,
    () => false,
  );

/** Plays the recording at a pace of frames per second; from the last frame it begins again. */
export function usePlayer(store: ViewerStore) {
  const [pacePerS, setPacePerS] = useState(10);
  const still = useReducedMotion();

  const toggle = useCallback(() => {
    if (still) {
      store.step(1);
      return;
    }
    const { playing, frame } = store.get();
    if (!playing && frame === store.frames - 1) store.goTo(0);
    store.set({ playing: !playing, direction: 1 });
  }, [store, still]);

  useEffect(() => {
    let request = 0;
    let lastMs = 0;
    const tick = (nowMs: number) => {
      const { playing, frame, shown } = store.get();
      if (!playing) return;
      const sinceMs = nowMs - lastMs;
      const ready = shown === frame || sinceMs > WAIT_MS;
      if (ready && sinceMs >= 1000 / pacePerS) {
        // What is left over of the interval counts for the next frame, or the pace would sag.
        lastMs = sinceMs > 2000 / pacePerS ? nowMs : lastMs + 1000 / pacePerS;
        if (frame === store.frames - 1) {
          store.set({ playing: false });
          return;
        }
        store.goTo(frame + 1);
      }
      request = requestAnimationFrame(tick);
    };
    let wasPlaying = false;
    const watch = () => {
      const { playing } = store.get();
      if (playing && !wasPlaying) {
        lastMs = performance.now();
        request = requestAnimationFrame(tick);
      }
      wasPlaying = playing;
    };
    const stop = store.subscribe(watch);
    watch();
    return () => {
      stop();
      cancelAnimationFrame(request);
    };
  }, [store, pacePerS]);

  return { toggle, pacePerS, setPacePerS, still };
}

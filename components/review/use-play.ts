'use client';

import { useCallback, useEffect, useState } from 'react';
import type { Film } from '@/lib/review/film';

/** Slow enough to see each frame. */
const STEP_MS = 120;

/** Runs through the frames of a film, round and round, until stopped. With reduced motion it does not run at all. */
export function usePlay(film: Film, show: (frame: (before: number) => number) => void) {
  const { firstFrame, frames } = film;
  const [played, setPlayed] = useState<Film | null>(null);
  // Another film does not play by itself.
  const playing = played === film;
  useEffect(() => {
    if (!playing) return;
    const timer = setInterval(
      () => show((at) => (at + 1 < firstFrame + frames ? at + 1 : firstFrame)),
      STEP_MS,
    );
    return () => clearInterval(timer);
  }, [playing, firstFrame, frames, show]);
  const stop = useCallback(() => setPlayed(null), []);
  const toggle = useCallback(() => {
    const still = window.matchMedia('(prefers-reduced-motion: reduce)').matches;
    // Without motion the key still steps, a frame at a time.
    if (still) show((at) => (at + 1 < firstFrame + frames ? at + 1 : firstFrame));
    else setPlayed((was) => (was === film ? null : film));
  }, [film, firstFrame, frames, show]);
  return { playing, stop, toggle };
}

'use client';

import { useCallback, useEffect, useState } from 'react';
import type { Film } from '@/lib/review/film';

/** Slow enough to see each frame. */
const STEP_MS = 120;

/** Runs through the frames of a film, round and round, until stopped. With reduced motion it does not run at all. */
export function usePlay({ firstFrame, frames }: Film, show: (frame: (before: number) => number) => void) {
  const [playing, setPlaying] = useState(false);
  useEffect(() => {
    if (!playing) return;
    const timer = setInterval(
      () => show((at) => (at + 1 < firstFrame + frames ? at + 1 : firstFrame)),
      STEP_MS,
    );
    return () => clearInterval(timer);
  }, [playing, firstFrame, frames, show]);
  const stop = useCallback(() => setPlaying(false), []);
  const toggle = useCallback(() => {
    const still = window.matchMedia('(prefers-reduced-motion: reduce)').matches;
    // Without motion the key still steps, a frame at a time.
    if (still) show((at) => (at + 1 < firstFrame + frames ? at + 1 : firstFrame));
    else setPlaying((was) => !was);
  }, [firstFrame, frames, show]);
  return { playing, stop, toggle };
}

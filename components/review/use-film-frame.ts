'use client';

import { useCallback, useState } from 'react';
import type { Film } from '@/lib/review/film';

/** The frame of a film that is shown large: that of closest approach for every new film. */
export function useFilmFrame(film: Film) {
  const [chosen, setChosen] = useState<{ film: Film; frame: number } | null>(null);
  const show = useCallback(
    (next: number | ((before: number) => number)) =>
      setChosen((was) => {
        const before = was?.film === film ? was.frame : film.middleFrame;
        return { film, frame: typeof next === 'number' ? next : next(before) };
      }),
    [film],
  );
  return [chosen?.film === film ? chosen.frame : film.middleFrame, show] as const;
}

'use client';

import { memo, useLayoutEffect, useRef } from 'react';
import { drawTracks } from '@/components/canvas/draw-tracks';
import { readWellColours } from '@/components/canvas/stroke-style';
import type { TrackBlock } from '@/components/canvas/track-block';
import type { Film } from '@/lib/review/film';
import { filmCell, filmView } from './film-block';

interface FilmCanvasProps {
  film: Film;
  picture: ImageBitmap | null;
  block: TrackBlock;
  frame: number;
  sidePx: number;
  /** Tracks over the picture; false shows the bare pixels. */
  trails?: boolean;
  /** Told when the picture stands on the canvas. */
  onDrawn?: () => void;
}

/** One frame of a film: camera pixels as squares, both tracks as far as they have come by then. */
export const FilmCanvas = memo(function FilmCanvas({
  film,
  picture,
  block,
  frame,
  sidePx,
  trails = true,
  onDrawn,
}: FilmCanvasProps) {
  const canvas = useRef<HTMLCanvasElement>(null);
  // Before the screen shows the page: a candidate never stands there with the frames of another.
  useLayoutEffect(() => {
    const element = canvas.current;
    const context = element?.getContext('2d');
    if (!element || !context) return;
    const ratio = Math.min(3, window.devicePixelRatio || 1);
    element.width = Math.round(sidePx * ratio);
    element.height = element.width;
    context.scale(ratio, ratio);
    if (picture) {
      const cell = filmCell(film, frame);
      context.imageSmoothingEnabled = false;
      context.drawImage(picture, cell.x, cell.y, film.sizePx, film.sizePx, 0, 0, sidePx, sidePx);
    }
    if (trails) {
      drawTracks(context, block, {
        frame,
        trailFrames: film.frames,
        view: filmView(film, sidePx),
        well: { width: sidePx, height: sidePx },
        colours: readWellColours(element),
        chosen: null,
      });
    }
    onDrawn?.();
  }, [film, picture, block, frame, sidePx, trails, onDrawn]);
  return <canvas ref={canvas} aria-hidden="true" className="block aspect-square w-full" />;
});

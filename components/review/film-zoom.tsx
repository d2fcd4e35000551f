'use client';

import type { TrackBlock } from '@/components/canvas/track-block';
import { useWidth } from '@/components/ui/use-width';
import { formatCount } from '@/lib/format/count';
import type { Film } from '@/lib/review/film';
import { FilmCanvas } from './film-canvas';

interface FilmZoomProps {
  film: Film;
  picture: ImageBitmap | null;
  block: TrackBlock;
  frame: number;
  pixelSizeM: number;
  trails: boolean;
  label: string;
  failure: string | null;
  onDrawn?: () => void;
}

/** The longest bar of 1, 2 or 5 times a power of ten micrometres that takes less than a third of the well. */
function barOf(metresPerPx: number, sidePx: number): { widthPx: number; words: string } {
  const roomUm = (metresPerPx * sidePx * 1e6) / 3;
  const power = 10 ** Math.floor(Math.log10(roomUm));
  const factor = [5, 2, 1].find((f) => f * power <= roomUm * (1 + 1e-9)) ?? 1;
  const um = factor * power;
  return { widthPx: (um * 1e-6) / metresPerPx, words: `${Number(um.toPrecision(3))} \u00b5m` };
}

const TAG = 'absolute bg-well/75 px-[5px] text-note text-well-text';

/** One frame large, with its number, its enlargement and a scale bar. */
export function FilmZoom({
  film,
  picture,
  block,
  frame,
  pixelSizeM,
  trails,
  label,
  failure,
  onDrawn,
}: FilmZoomProps) {
  const [holder, sidePx] = useWidth<HTMLDivElement>(480);
  const scale = sidePx / film.sizePx;
  const bar = barOf(pixelSizeM / scale, sidePx);
  return (
    <div ref={holder} role="img" aria-label={label} className="relative w-full overflow-hidden bg-well">
      <FilmCanvas
        film={film}
        picture={picture}
        block={block}
        frame={frame}
        sidePx={sidePx}
        trails={trails}
        onDrawn={onDrawn}
      />
      {failure ? <p className="absolute inset-x-4 top-1/2 text-center text-well-text">{failure}</p> : null}
      <span className={`${TAG} left-2 top-2`}>
        frame {formatCount(frame)}, {Math.round(scale)} ×
      </span>
      <span className={`${TAG} bottom-2 right-2 flex items-center gap-[6px]`}>
        {bar.words}
        <svg width={bar.widthPx} height="8" aria-hidden="true" className="overflow-visible">
          <path d={`M0 4H${bar.widthPx}M0 1V7M${bar.widthPx} 1V7`} stroke="currentColor" strokeWidth="1.5" />
        </svg>
      </span>
    </div>
  );
}

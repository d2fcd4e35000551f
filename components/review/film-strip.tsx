'use client';

import type { TrackBlock } from '@/components/canvas/track-block';
import { formatCount } from '@/lib/format/count';
import { stripFrames, type Film } from '@/lib/review/film';
import { FilmCanvas } from './film-canvas';

interface FilmStripProps {
  film: Film;
  picture: ImageBitmap | null;
  block: TrackBlock;
  frameIntervalS: number;
  /** The frame shown large. */
  frame: number;
  onFrame: (frame: number) => void;
}

const TILE_PX = 105;

/** Time of a frame from closest approach, `+12 ms`; the frame's own number at closest approach. */
export function sinceText(frame: number, middleFrame: number, frameIntervalS: number): string {
  if (frame === middleFrame) return formatCount(frame);
  const ms = (frame - middleFrame) * frameIntervalS * 1e3;
  const digits = Math.abs(ms) >= 100 ? 0 : Math.abs(ms) >= 10 ? 1 : 2;
  return `${ms > 0 ? '+' : '\u2212'}${Number(Math.abs(ms).toFixed(digits))} ms`;
}

/** The frames around closest approach on their thread, one bead each. */
export function FilmStrip({ film, picture, block, frameIntervalS, frame, onFrame }: FilmStripProps) {
  const frames = stripFrames(film);
  return (
    <div className="relative overflow-x-auto pb-1" role="group" aria-label="Frames around closest approach">
      <ol className="flex min-w-max gap-[10px] hand:min-w-0 hand:justify-between">
        {frames.map((at) => {
          const middle = at === film.middleFrame;
          const shown = at === frame;
          return (
            <li
              key={at}
              className="relative w-[105px] min-w-0 shrink-0 before:absolute before:-inset-x-[5px] before:bottom-[26px] before:h-[1.5px] before:bg-ink-2 before:content-[''] hand:shrink"
            >
              <button
                type="button"
                onClick={() => onFrame(at)}
                aria-pressed={shown}
                aria-label={
                  middle
                    ? `Frame ${at}, closest approach`
                    : `Frame ${at}, ${sinceText(at, film.middleFrame, frameIntervalS)}`
                }
                className="block w-full text-center"
              >
                <span
                  className={`block overflow-hidden border bg-well ${shown ? 'border-ink' : 'border-transparent'}`}
                >
                  <FilmCanvas film={film} picture={picture} block={block} frame={at} sidePx={TILE_PX} />
                </span>
                <svg
                  width="20"
                  height="20"
                  viewBox="0 0 20 20"
                  aria-hidden="true"
                  className="relative mx-auto mt-1 block"
                >
                  {shown ? (
                    <circle cx="10" cy="10" r="8.5" className="fill-paper stroke-ink" strokeWidth="1.5" />
                  ) : null}
                  <circle
                    cx="10"
                    cy="10"
                    r={middle ? 5 : 3.5}
                    className={middle ? 'fill-event' : 'fill-ink-2'}
                  />
                </svg>
                <span
                  className={`block text-small tabular-nums ${middle ? 'font-strong text-ink' : 'text-ink-2'}`}
                >
                  {sinceText(at, film.middleFrame, frameIntervalS)}
                </span>
              </button>
            </li>
          );
        })}
      </ol>
    </div>
  );
}

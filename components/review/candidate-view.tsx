'use client';

import { memo, useMemo, useState } from 'react';
import { candidateSentence, separationFits, separationPoints } from '@/components/analyses/candidate-words';
import { SeparationPlot } from '@/components/charts/separation-plot';
import { KeyCap } from '@/components/ui/button';
import { formatCount } from '@/lib/format/count';
import type { LoadedCandidate } from './candidate-store';
import { filmBlock } from './film-block';
import { FilmStrip, sinceText } from './film-strip';
import { FilmZoom } from './film-zoom';
import { useFilmFrame } from './use-film-frame';
import { useDeskKeys } from './use-desk-keys';
import { usePlay } from './use-play';

export interface Scale {
  pixelSizeM: number;
  frameIntervalS: number;
}

interface CandidateViewProps {
  loaded: LoadedCandidate;
  scale: Scale;
  playKey: string;
  onDrawn?: () => void;
}

/**
 * Strip, one frame large, and the squared separation: all that there is to see of a candidate. It stays on the page from
 * one candidate to the next, and is drawn anew only for what it is given: the next one must stand there at once.
 */
export const CandidatePictures = memo(function CandidatePictures({
  loaded,
  scale,
  playKey,
  onDrawn,
}: CandidateViewProps) {
  const { detail, film: picture, failure } = loaded;
  const { film } = detail;
  const block = useMemo(() => filmBlock(detail), [detail]);
  const [frame, setFrame] = useFilmFrame(film);
  const [trails, setTrails] = useState(true);
  const last = film.firstFrame + film.frames - 1;
  const clamp = (at: number) => Math.max(film.firstFrame, Math.min(last, at));
  const play = usePlay(film, setFrame);
  useDeskKeys((key) => {
    if (key === 'ArrowRight' || key === 'ArrowLeft') {
      play.stop();
      setFrame(clamp(frame + (key === 'ArrowRight' ? 1 : -1)));
      return true;
    }
    if (key.toLowerCase() === playKey) {
      play.toggle();
      return true;
    }
    return false;
  });
  const sentence = candidateSentence(detail);
  const when = frame === film.middleFrame ? 'closest approach' : sinceText(frame, film.middleFrame, scale.frameIntervalS); // prettier-ignore
  return (
    <>
      <FilmStrip
        film={film}
        picture={picture}
        block={block}
        frameIntervalS={scale.frameIntervalS}
        frame={frame}
        onFrame={(at) => {
          play.stop();
          setFrame(at);
        }}
      />
      <div className="grid grid-cols-[minmax(0,1fr)] gap-[26px] pt-[18px] aside:grid-cols-[minmax(0,480px)_minmax(0,1fr)]">
        <div className="min-w-0">
          <FilmZoom
            film={film}
            picture={picture}
            block={block}
            frame={frame}
            pixelSizeM={scale.pixelSizeM}
            trails={trails}
            failure={failure}
            onDrawn={onDrawn}
            label={`Frame ${frame}, ${when}, ${film.sizePx} px wide, with tracks ${detail.trackA} and ${detail.trackB}`}
          />
          <div className="flex flex-wrap items-center gap-x-[18px] gap-y-1 pt-2 text-small text-ink-2">
            <span>
              <KeyCap>←</KeyCap> <KeyCap>→</KeyCap> frame
            </span>
            <button type="button" className="min-h-6" aria-pressed={play.playing} onClick={play.toggle}>
              <KeyCap>{playKey.toUpperCase()}</KeyCap> {play.playing ? 'stop' : 'play'}
            </button>
            <label className="flex min-h-6 items-center gap-[6px]">
              <input
                type="checkbox"
                checked={trails}
                onChange={() => setTrails(!trails)}
                className="accent-ink"
              />
              tracks drawn
            </label>
          </div>
        </div>
        <div className="min-w-0">
          <h2 className="pb-[2px] font-serif text-head2 font-strong">
            Separation squared{' '}
            <span className="font-sans text-note font-text text-ink-2">
              line: square-root law, dotted: fly-by
            </span>
          </h2>
          <SeparationPlot
            points={separationPoints(detail)}
            fits={separationFits(detail)}
            t0_s={detail.t0_s}
            label={sentence}
            fileName={`separation-candidate-${detail.event}`}
            heightPx={420}
          />
        </div>
      </div>
      <p className="sr-only" role="status">
        Candidate {formatCount(detail.event)}. {sentence}
      </p>
    </>
  );
});

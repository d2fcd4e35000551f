import { toTrackBlock, type TrackBlock } from '@/components/canvas/track-block';
import type { ViewBox } from '@/components/canvas/view-box';
import type { Film } from '@/lib/review/film';
import type { CandidateDetailView } from '@/lib/views/review-view';
import { POINT_BRIDGED } from '@/tracking/types';

/** The two tracks of a candidate as the strokes of the canvas take them. */
export function filmBlock({ paths, film }: Pick<CandidateDetailView, 'paths' | 'film'>): TrackBlock {
  const start = [0];
  for (const { frame } of paths) start.push(start.at(-1)! + frame.length);
  return toTrackBlock({
    from: film.firstFrame,
    to: film.firstFrame + film.frames - 1,
    tracks: paths.map(({ track }) => track),
    population: paths.map(({ population }) => population),
    pTrapped: paths.map(() => null),
    start,
    frame: paths.flatMap(({ frame }) => frame),
    x: paths.flatMap(({ x }) => x),
    y: paths.flatMap(({ y }) => y),
    flags: paths.flatMap(({ bridged }) => bridged.map((is) => (is ? POINT_BRIDGED : 0))),
  });
}

/** How the cut of a film lies in a square of this many CSS px. */
export function filmView({ leftPx, topPx, sizePx }: Film, sidePx: number): ViewBox {
  const scale = sidePx / sizePx;
  return { scale, offsetX: (0.5 - leftPx) * scale, offsetY: (0.5 - topPx) * scale };
}

/** Where the square of a frame lies in the picture of all. */
export function filmCell({ firstFrame, columns, sizePx }: Film, frame: number): { x: number; y: number } {
  const i = frame - firstFrame;
  return { x: (i % columns) * sizePx, y: Math.floor(i / columns) * sizePx };
}

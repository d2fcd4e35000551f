import type { TrackWindowView } from '@/lib/views/analysis-view';
import { POPULATION_UNKNOWN, type TrackWindow } from '@/models/queries/track-window';

/** Hundredths of a pixel are more than a screen shows, and halve what goes over the line. */
const short = (value: number): number => Math.round(value * 100) / 100;

export function trackWindowView(window: TrackWindow, from: number, to: number): TrackWindowView {
  return {
    revision: window.revision,
    from,
    to,
    tracks: Array.from(window.track),
    population: Array.from(window.population, (code) => (code === POPULATION_UNKNOWN ? null : code)),
    pTrapped: Array.from(window.pTrapped, (p) => (Number.isNaN(p) ? null : Math.round(p * 1e4) / 1e4)),
    firstFrame: Array.from(window.firstFrame),
    lastFrame: Array.from(window.lastFrame),
    start: Array.from(window.start),
    frame: Array.from(window.frame),
    x: Array.from(window.xPx, short),
    y: Array.from(window.yPx, short),
    flags: Array.from(window.flags),
    changed: Array.from(window.track).filter((_, i) => window.changed[i] === 1),
    given: Array.from(window.given, ([track, stretches]) =>
      stretches.map(([from, to, population]) => ({ track, from, to, population })),
    ).flat(),
  };
}

import { partingAxis } from './candidate-marks';
import { drawCandidates, type CandidateMark } from './draw-candidates';
import { drawTag } from './draw-tag';
import { drawTracks } from './draw-tracks';
import type { OverlayScene } from './frame-well';
import { indexOfTrack, trailAt, type TrackBlock } from './track-block';
import { TRAIL_FRAMES } from './track-blocks';
import { trackWords } from './track-words';
import { centreOn, toScreen, type Size, type ViewBox } from './view-box';
import type { ViewerState } from './viewer-store';

/** A candidate's mark shows this many frames around its meeting. */
const MARK_REACH_FRAMES = 8;

type PairMark = CandidateMark & { trackA: number; trackB: number };

/** Tracks, then candidates, then the tag of what is chosen. */
export function drawTrackOverlay(
  scene: OverlayScene,
  block: TrackBlock | null,
  marks: readonly PairMark[],
): void {
  const { ctx, state, view, well, colours } = scene;
  const frame = state.shown;
  if (block) {
    drawTracks(ctx, block, {
      frame,
      trailFrames: TRAIL_FRAMES,
      view,
      well,
      colours,
      chosen: state.chosenTrack,
    });
  }
  const near = marks
    .filter((mark) => Math.abs(mark.frame - frame) <= MARK_REACH_FRAMES)
    .map((mark) => ({
      ...mark,
      partingRad: block ? partingAxis(block, mark.trackA, mark.trackB, mark.frame) : 0,
    }));
  drawCandidates(ctx, near, {
    frame,
    reachFrames: MARK_REACH_FRAMES,
    view,
    well,
    colours,
    chosen: state.chosenEvent,
  });
  if (block && state.chosenTrack !== null) tagChosen(scene, block, state.chosenTrack, frame);
}

export function tagChosen(
  { ctx, view, well }: OverlayScene,
  block: TrackBlock,
  track: number,
  frame: number,
): void {
  const i = indexOfTrack(block, track);
  const trail = { first: 0, last: 0 };
  if (i < 0 || !trailAt(block, i, frame, 1, trail)) return;
  const at = toScreen(view, { x: block.x[trail.last], y: block.y[trail.last] });
  const font = getComputedStyle(document.body).fontFamily;
  drawTag(ctx, well.width < 500 ? `track ${track}` : trackWords(block, i), at, well, font);
}

/**
 * The view with the track that is to be brought in its middle; the same view where the whole frame
 * shows anyway; null while the place of the track is not known.
 */
export function viewOnTrack(
  block: TrackBlock | null,
  { bring, frame, view, well, zoomed }: ViewerState,
  image: Size,
): ViewBox | null {
  const i = block && bring !== null ? indexOfTrack(block, bring) : -1;
  const trail = { first: 0, last: 0 };
  if (!block || !view || !well || i < 0 || !trailAt(block, i, frame, 1, trail)) return null;
  if (!zoomed) return view;
  return centreOn(view, { x: block.x[trail.last], y: block.y[trail.last] }, image, well);
}

/** The next track on screen after `current` in the order of their numbers, going round; null without any. */
export function neighbourTrack(
  block: TrackBlock,
  scene: { frame: number; view: OverlayScene['view']; well: OverlayScene['well'] },
  current: number | null,
  direction: 1 | -1,
): number | null {
  const trail = { first: 0, last: 0 };
  const seen: number[] = [];
  for (let i = 0; i < block.count; i += 1) {
    if (!trailAt(block, i, scene.frame, 1, trail)) continue;
    const at = toScreen(scene.view, { x: block.x[trail.last], y: block.y[trail.last] });
    if (at.x >= 0 && at.y >= 0 && at.x <= scene.well.width && at.y <= scene.well.height) {
      seen.push(block.track[i]);
    }
  }
  seen.sort((a, b) => a - b);
  if (seen.length === 0) return null;
  if (direction === 1) return seen.find((track) => track > (current ?? -1)) ?? seen[0];
  return seen.findLast((track) => track < (current ?? Infinity)) ?? seen[seen.length - 1];
}

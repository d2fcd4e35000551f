'use client';

import { useCallback, useEffect, useMemo, useState } from 'react';
import { useTrackWindow } from '@/components/data/use-track-window';
import { Button } from '@/components/ui/button';
import { StrokeLegend } from '@/components/ui/strokes';
import type { CandidateView } from '@/lib/views/analysis-view';
import { candidateMarks } from './candidate-marks';
import type { OverlayScene } from './frame-well';
import { createTrackPicker, type TrackPicker } from './pick-track';
import type { TrackBlock } from './track-block';
import { TRAIL_FRAMES } from './track-blocks';
import { drawTrackOverlay, neighbourTrack, viewOnTrack } from './track-overlay';
import type { Point, Size } from './view-box';
import { ViewerPanel, type ViewedRecording } from './viewer-panel';
import type { ViewerStore } from './viewer-store';

interface TrackViewerProps {
  store: ViewerStore;
  recording: ViewedRecording;
  analysisId: string;
  /** Null while the tracks are not linked yet; another word when there is more to know of them. */
  ready: string | null;
  spotsPerFrame: readonly number[];
  candidates: readonly CandidateView[];
}

/** Tracks and candidates over the frames of a recording. */
export function TrackViewer(props: TrackViewerProps) {
  const { store, recording, candidates } = props;
  const [version, setVersion] = useState(0);
  const [failure, setFailure] = useState<string | null>(null);
  const [late, setLate] = useState(false);
  const onChange = useCallback(() => setVersion((n) => n + 1), []);
  const blocks = useTrackWindow(props.analysisId, recording.frames, props.ready, onChange);
  const marks = useMemo(
    () =>
      recording.frameIntervalS === null
        ? []
        : candidateMarks(candidates, recording.frameIntervalS, recording.frames),
    [candidates, recording.frameIntervalS, recording.frames],
  );
  const events = useMemo(() => marks.map(({ frame, kind }) => ({ frame, kind })), [marks]);
  const [picker] = useState(createPickerCache);

  useEffect(() => {
    const look = () => {
      const state = store.get();
      const source = blocks.current;
      setFailure(source?.failure(state.frame)?.message ?? null);
      setLate(source !== null && source.at(state.frame) === null);
      if (state.bring === null || state.shown !== state.frame) return;
      const view = viewOnTrack(source?.at(state.frame) ?? null, state, recording);
      if (view) store.set({ view, bring: null });
    };
    look();
    return store.subscribe(look);
  }, [store, blocks, version, recording]);

  const drawOverlay = ({ state, ...scene }: OverlayScene) => {
    const source = blocks.current;
    source?.want(state.frame, state.direction);
    drawTrackOverlay({ state, ...scene }, source?.at(state.shown) ?? null, marks);
  };
  const onPick = (place: Point, reachPx: number) => {
    const { shown } = store.get();
    const block = blocks.current?.at(shown);
    if (!block) return;
    const found = picker(block, shown).nearest(place.x, place.y, reachPx);
    store.set({ chosenTrack: found < 0 ? null : block.track[found], chosenEvent: null });
  };
  const onTrackStep = (direction: 1 | -1, well: Size) => {
    const { shown, view, chosenTrack } = store.get();
    const block = blocks.current?.at(shown);
    if (!block || !view) return;
    const scene = { frame: shown, view, well };
    store.set({ chosenTrack: neighbourTrack(block, scene, chosenTrack, direction) });
  };

  return (
    <ViewerPanel
      store={store}
      recording={recording}
      spotsPerFrame={props.spotsPerFrame}
      events={events}
      drawOverlay={drawOverlay}
      overlayVersion={`${version} ${marks.length}`}
      onPick={onPick}
      onTrackStep={onTrackStep}
      onWell={
        failure ? (
          <p
            role="alert"
            className="absolute inset-x-0 top-8 flex flex-wrap items-center gap-3 bg-well/85 px-2 py-1 text-note text-well-text"
          >
            The tracks of these frames could not be had. {failure}
            <Button
              className="border-well-text! text-well-text! hover:bg-well-mid!"
              onClick={() => blocks.current?.retry(store.get().frame)}
            >
              Try again
            </Button>
          </p>
        ) : late ? (
          <p className="loading-bars pointer-events-none absolute right-2 top-2 bg-well/72 px-[6px] py-px text-small text-well-text">
            tracks are on their way
          </p>
        ) : null
      }
    >
      <StrokeLegend
        onWell
        strokes={['trapped', 'free', 'undecided', 'event']}
        note={`trails of ${TRAIL_FRAMES} frames`}
      />
    </ViewerPanel>
  );
}

/** Keeps the picker of the frame that was clicked last: people click several times in one frame. */
function createPickerCache(): (block: TrackBlock, frame: number) => TrackPicker {
  let made: { block: TrackBlock; frame: number; picker: TrackPicker } | null = null;
  return (block, frame) => {
    if (made?.block !== block || made.frame !== frame) {
      made = { block, frame, picker: createTrackPicker(block, frame, TRAIL_FRAMES) };
    }
    return made.picker;
  };
}

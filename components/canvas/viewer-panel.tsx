'use client';

import { useCallback, useId, useMemo, useRef, type ReactNode } from 'react';
import { Fold } from '@/components/ui/fold';
import type { TimeLineEvent } from '@/components/ui/time-line-marks';
import { contrastRange } from './contrast';
import { ContrastThread } from './contrast-thread';
import { FrameWell, type OverlayScene, type WellWork } from './frame-well';
import { usePlayer } from './use-player';
import { fitView, zoomAt, type Point, type Size } from './view-box';
import { ViewerControls } from './viewer-controls';
import type { ViewerStore } from './viewer-store';
import { FrameTag, ViewerTimeLine } from './viewer-time-line';

/** What a viewer needs to know of a recording that is ready. */
export interface ViewedRecording {
  id: string;
  name: string;
  frames: number;
  width: number;
  height: number;
  bitDepth: number | null;
  frameIntervalS: number | null;
  /** Contrast to open with. */
  low: number;
  high: number;
}

interface ViewerPanelProps {
  store: ViewerStore;
  recording: ViewedRecording;
  spotsPerFrame?: readonly number[];
  events?: readonly TimeLineEvent[];
  drawOverlay?: (scene: OverlayScene) => void;
  overlayVersion?: unknown;
  onPick?: (place: Point, reachPx: number) => void;
  onTrackStep?: (direction: 1 | -1, well: Size) => void;
  /** Tags and notes that lie on the well. */
  onWell?: ReactNode;
  /** Between the time line and the controls: a legend. */
  children?: ReactNode;
  contrastOpen?: boolean;
  work?: WellWork;
  /** Height that the well never exceeds, CSS. */
  maxHeight?: string;
  /** Further controls under the well. */
  controls?: ReactNode;
}

const nothing = () => undefined;

/** Frames with contrast, zoom, pan, scrub and play, and whatever is drawn over them. */
export function ViewerPanel(props: ViewerPanelProps) {
  const { store, recording } = props;
  const keysId = useId();
  const player = usePlayer(store);
  const { width, height } = recording;
  const image = useMemo<Size>(() => ({ width, height }), [width, height]);
  const frame = useRef<HTMLDivElement>(null);
  const wellSize = (): Size => ({
    width: frame.current?.clientWidth ?? 1,
    height: frame.current?.clientHeight ?? 1,
  });
  const onZoom = useCallback(
    (factor: number) => {
      const well = wellSize();
      const { view } = store.get();
      const middle = { x: well.width / 2, y: well.height / 2 };
      if (view) store.set({ view: zoomAt(view, factor, middle, image, well) });
    },
    [store, image],
  );
  const range = contrastRange(recording.low, recording.high, recording.bitDepth);
  const contrast = (
    <ContrastThread
      store={store}
      recordingId={recording.id}
      imageWidth={recording.width}
      range={range}
      initial={{ low: recording.low, high: recording.high }}
    />
  );
  return (
    <div>
      <div
        ref={frame}
        className="max-hand:-mx-sheet-x-narrow hand:w-full"
        // As high as the picture at this width asks for, but never higher than leaves room to work.
        style={{
          aspectRatio: `${recording.width} / ${recording.height}`,
          maxHeight: props.maxHeight ?? 'min(62vh, 620px)',
          minHeight: 240,
        }}
      >
        <FrameWell
          store={store}
          recordingId={recording.id}
          image={image}
          label={`Frames of ${recording.name}`}
          describedBy={keysId}
          drawOverlay={props.drawOverlay ?? nothing}
          overlayVersion={props.overlayVersion}
          onPick={props.onPick ?? nothing}
          onTrackStep={props.onTrackStep}
          onPlay={player.toggle}
          {...props.work}
          heightClass="h-full"
        >
          <FrameTag store={store} frameIntervalS={recording.frameIntervalS} />
          {props.onWell}
        </FrameWell>
      </div>
      <ViewerTimeLine
        store={store}
        frameIntervalS={recording.frameIntervalS}
        spotsPerFrame={props.spotsPerFrame}
        events={props.events}
      />
      {props.children}
      <ViewerControls
        store={store}
        player={player}
        keysId={keysId}
        onZoom={onZoom}
        onFit={() => store.set({ view: fitView(image, wellSize()) })}
      />
      {props.controls}
      {props.contrastOpen ? (
        contrast
      ) : (
        <Fold title="Contrast" className="print:hidden">
          {contrast}
        </Fold>
      )}
    </div>
  );
}

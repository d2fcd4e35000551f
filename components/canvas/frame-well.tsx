'use client';

import type Konva from 'konva';
import { useEffect, useRef, useState, type KeyboardEvent, type ReactNode } from 'react';
import { Layer, Shape, Stage } from 'react-konva';
import { Button } from '@/components/ui/button';
import { FramePictures } from './frame-pictures';
import { readWellColours, type WellColours } from './stroke-style';
import { useWellGestures, type WellPointer } from './use-well-gestures';
import { useViewer } from './use-viewer';
import { fitView, panBy, zoomAt, type Point, type Size, type ViewBox } from './view-box';
import { commandOf } from './viewer-keys';
import type { ViewerState, ViewerStore } from './viewer-store';

/** What an overlay draws with: a context in CSS px of the well, and what is shown. */
export interface OverlayScene {
  ctx: CanvasRenderingContext2D;
  state: ViewerState;
  view: ViewBox;
  well: Size;
  colours: WellColours;
}

/** What the uppermost layer draws with: the picture as well, for looking at it closely. */
export interface NearScene extends OverlayScene {
  picture: ImageBitmap | null;
}

/** A layer of its own for what follows the pointer, so that tracks need not be drawn again for it. */
export interface NearLayer {
  draw: (scene: NearScene) => void;
  /** Handed the function that has the layer drawn again; null when the well is gone. */
  attach: (redraw: (() => void) | null) => void;
}

/** What a page adds to a well that is worked in. */
export interface WellWork {
  /** Keys of the page around the well, asked before the well's own; true when the press was taken. */
  onKey?: (event: KeyboardEvent) => boolean;
  pointer?: WellPointer;
  near?: NearLayer;
}

interface FrameWellProps extends WellWork {
  store: ViewerStore;
  recordingId: string;
  image: Size;
  /** Name of the well for screen readers. */
  label: string;
  describedBy?: string;
  drawOverlay: (scene: OverlayScene) => void;
  /** The overlay is drawn again whenever this changes. */
  overlayVersion?: unknown;
  onPick: (place: Point, reachPx: number) => void;
  onTrackStep?: (direction: 1 | -1, well: Size) => void;
  onPlay?: () => void;
  heightClass: string;
  children?: ReactNode;
}

/** Frames on one canvas layer, what was found in them on another; neither goes through React when the frame changes. */
export function FrameWell(props: FrameWellProps) {
  const { store, recordingId, image, overlayVersion, heightClass, children } = props;
  const holder = useRef<HTMLDivElement>(null);
  const imageLayer = useRef<Konva.Layer>(null);
  const overlayLayer = useRef<Konva.Layer>(null);
  const nearLayer = useRef<Konva.Layer>(null);
  const pictures = useRef<FramePictures | null>(null);
  const colours = useRef<WellColours | null>(null);
  const drawOverlay = useRef(props.drawOverlay);
  const onPick = useRef(props.onPick);
  const pointer = useRef<WellPointer>(props.pointer ?? {});
  const { near } = props;
  const wellSize = useRef<Size | null>(null);
  const [size, setSize] = useState<Size | null>(null);
  const [failure, setFailure] = useState<string | null>(null);

  useEffect(() => {
    drawOverlay.current = props.drawOverlay;
    onPick.current = props.onPick;
    pointer.current = props.pointer ?? {};
  });

  useEffect(() => {
    const element = holder.current;
    if (!element) return;
    colours.current = readWellColours(element);
    const observer = new ResizeObserver(([entry]) => {
      const { width, height } = entry.contentRect;
      const next = { width: Math.round(width), height: Math.round(height) };
      if (next.width < 1 || next.height < 1) return;
      store.set({ well: next, view: viewAfterResize(store.get().view, wellSize.current, next, image) });
      wellSize.current = next;
      setSize(next);
    });
    observer.observe(element);
    return () => observer.disconnect();
  }, [store, image]);

  useEffect(() => {
    const source = new FramePictures(recordingId, image, store.frames, () => follow());
    pictures.current = source;
    const follow = () => {
      const state = store.get();
      source.follow(state, window.devicePixelRatio);
      if (state.view && wellSize.current) {
        store.set({ zoomed: state.view.scale > fitView(image, wellSize.current).scale * 1.001 });
      }
      const problem = source.failure(state.frame);
      setFailure(problem?.message ?? null);
      // Overlay and picture change together: the overlay waits until the picture is there.
      if (source.picture(state.frame) || problem) store.set({ shown: state.frame });
      imageLayer.current?.batchDraw();
      overlayLayer.current?.batchDraw();
      nearLayer.current?.batchDraw();
    };
    const stop = store.subscribe(follow);
    follow();
    return () => {
      stop();
      source.close();
      pictures.current = null;
    };
  }, [store, recordingId, image]);

  useEffect(() => {
    overlayLayer.current?.batchDraw();
  }, [overlayVersion]);

  useEffect(() => {
    const onOnline = () => pictures.current?.retry(store.get().frame);
    window.addEventListener('online', onOnline);
    return () => window.removeEventListener('online', onOnline);
  }, [store]);

  useEffect(() => {
    near?.attach(() => nearLayer.current?.batchDraw());
    return () => near?.attach(null);
  }, [near]);

  useWellGestures(holder, store, image, wellSize, onPick, pointer);

  const onKeyDown = (event: KeyboardEvent) => {
    if (event.target !== holder.current) return;
    if (props.onKey?.(event)) {
      event.preventDefault();
      return;
    }
    const command = commandOf(event);
    const well = wellSize.current;
    const { view } = store.get();
    if (!command || !well || !view) return;
    if (command.kind === 'clear') {
      store.set({ chosenTrack: null, chosenEvent: null });
      return;
    }
    event.preventDefault();
    const middle = { x: well.width / 2, y: well.height / 2 };
    if (command.kind === 'step') store.step(command.frames);
    else if (command.kind === 'first') store.goTo(0);
    else if (command.kind === 'last') store.goTo(store.frames - 1);
    else if (command.kind === 'zoom') store.set({ view: zoomAt(view, command.factor, middle, image, well) });
    else if (command.kind === 'pan') store.set({ view: panBy(view, command.dx, command.dy, image, well) });
    else if (command.kind === 'fit') store.set({ view: fitView(image, well) });
    else if (command.kind === 'play') props.onPlay?.();
    else props.onTrackStep?.(command.kind === 'next-track' ? 1 : -1, well);
  };

  const paintImage = (context: Konva.Context) => {
    const { view, shown } = store.get();
    const picture = pictures.current?.picture(shown);
    if (!view || !picture) return;
    const ctx = context._context;
    // Camera pixels stay squares when enlarged: a smoothed pixel is a measurement that nobody made.
    ctx.imageSmoothingEnabled = view.scale * window.devicePixelRatio < 1;
    const corner = view.scale / 2;
    const [left, top] = [view.offsetX - corner, view.offsetY - corner];
    ctx.drawImage(picture, left, top, image.width * view.scale, image.height * view.scale);
  };
  const sceneOn = (context: Konva.Context): OverlayScene | null => {
    const state = store.get();
    if (!state.view || !wellSize.current || !colours.current) return null;
    const ctx = context._context;
    return { ctx, state, view: state.view, well: wellSize.current, colours: colours.current };
  };
  const paintOverlay = (context: Konva.Context) => {
    const scene = sceneOn(context);
    if (scene) drawOverlay.current(scene);
  };
  const paintNear = (context: Konva.Context) => {
    const scene = sceneOn(context);
    if (!scene || !near) return;
    near.draw({ ...scene, picture: pictures.current?.picture(scene.state.shown) ?? null });
  };

  return (
    <div
      className={`relative overflow-hidden border border-well-edge bg-well has-[[role=application]:focus-visible]:outline-2 has-[[role=application]:focus-visible]:outline-offset-2 has-[[role=application]:focus-visible]:outline-violet ${heightClass}`}
    >
      <WellSurface
        holder={holder}
        store={store}
        label={props.label}
        describedBy={props.describedBy}
        onKeyDown={onKeyDown}
      >
        {size ? (
          <Stage width={size.width} height={size.height} listening={false}>
            <Layer ref={imageLayer} listening={false}>
              <Shape sceneFunc={paintImage} listening={false} perfectDrawEnabled={false} />
            </Layer>
            <Layer ref={overlayLayer} listening={false}>
              <Shape sceneFunc={paintOverlay} listening={false} perfectDrawEnabled={false} />
            </Layer>
            {near ? (
              <Layer ref={nearLayer} listening={false}>
                <Shape sceneFunc={paintNear} listening={false} perfectDrawEnabled={false} />
              </Layer>
            ) : null}
          </Stage>
        ) : null}
      </WellSurface>
      {children}
      {failure ? (
        <div
          role="alert"
          className="absolute inset-x-0 bottom-0 flex flex-wrap items-center gap-3 bg-well/85 px-3 py-2 text-note text-well-text"
        >
          {failure}
          <Button
            className="border-well-text! text-well-text! hover:bg-well-mid!"
            onClick={() => pictures.current?.retry(store.get().frame)}
          >
            Try again
          </Button>
        </div>
      ) : null}
    </div>
  );
}

/** The part that takes pointers and keys. One finger scrolls the page until the picture is zoomed. */
function WellSurface({
  holder,
  store,
  label,
  describedBy,
  onKeyDown,
  children,
}: {
  holder: React.RefObject<HTMLDivElement | null>;
  store: ViewerStore;
  label: string;
  describedBy?: string;
  onKeyDown: (event: KeyboardEvent) => void;
  children: ReactNode;
}) {
  const zoomed = useViewer(store, (state) => state.zoomed);
  return (
    <div
      ref={holder}
      role="application"
      aria-roledescription="frame viewer"
      aria-label={label}
      aria-describedby={describedBy}
      tabIndex={0}
      onKeyDown={onKeyDown}
      className={`absolute inset-0 cursor-crosshair outline-none select-none ${zoomed ? 'touch-none' : 'touch-pan-y'}`}
    >
      {children}
    </div>
  );
}

/** A new size keeps the middle and, where the whole frame was shown, goes on showing it. */
function viewAfterResize(view: ViewBox | null, before: Size | null, now: Size, image: Size): ViewBox {
  if (!view || !before) return fitView(image, now);
  if (Math.abs(view.scale - fitView(image, before).scale) < 1e-9) return fitView(image, now);
  return {
    ...view,
    offsetX: view.offsetX + (now.width - before.width) / 2,
    offsetY: view.offsetY + (now.height - before.height) / 2,
  };
}

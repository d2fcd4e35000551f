'use client';

import { useEffect, type RefObject } from 'react';
import { panBy, toImage, zoomAt, type Point, type Size } from './view-box';
import type { ViewerStore } from './viewer-store';

/** A press that moves less than this is a click. */
const CLICK_PX = 4;
/** Zoom per pixel of wheel travel; a notch of a mouse is about 100 px. */
const WHEEL_ZOOM = 0.0016;

/** Something taken hold of in the picture, until it is let go. Places are px of the image. */
export interface Grip {
  move(place: Point): void;
  /** @param travelled false for a press that did not move. */
  drop(place: Point, travelled: boolean): void;
  cancel(): void;
}

/** What else a well can do with pointers. */
export interface WellPointer {
  /** Called on a press: a grip takes the press over, null leaves it to panning and picking. */
  grab?: (place: Point, reachPx: number) => Grip | null;
  /** Where the pointer is; null when it has left. */
  hover?: (place: Point | null) => void;
}

/** How near to a track a click must be, CSS px. */
const PICK_REACH_PX = 12;

/**
 * Drag to pan, wheel and pinch to zoom, click to pick. Listeners are native, since a wheel must be
 * stopped from scrolling the page.
 *
 * @param well size of the well, null before it is known.
 * @param pointer grips and hovering, where the well has them.
 * @param onPick told the place of a click in the image and how far around it counts, image px.
 */
export function useWellGestures(
  element: RefObject<HTMLElement | null>,
  store: ViewerStore,
  image: Size,
  well: RefObject<Size | null>,
  onPick: RefObject<(place: Point, reachPx: number) => void>,
  pointer?: RefObject<WellPointer>,
): void {
  useEffect(() => {
    const target = element.current;
    if (!target) return;
    const held = new Map<number, Point>();
    let travelPx = 0;
    let grip: Grip | null = null;

    const placeOf = (event: MouseEvent): Point => {
      const box = target.getBoundingClientRect();
      return { x: event.clientX - box.left, y: event.clientY - box.top };
    };
    const move = (change: (size: Size) => void) => {
      const size = well.current;
      if (size && store.get().view) change(size);
    };
    const zoom = (factor: number, at: Point) =>
      move((size) => store.set({ view: zoomAt(store.get().view!, factor, at, image, size) }));

    const onWheel = (event: WheelEvent) => {
      event.preventDefault();
      const lines = event.deltaMode === WheelEvent.DOM_DELTA_LINE ? 33 : 1;
      // Trackpads send a pinch as a wheel with Ctrl and small steps.
      const gain = event.ctrlKey ? 6 : 1;
      zoom(Math.exp(-event.deltaY * lines * gain * WHEEL_ZOOM), placeOf(event));
    };
    const onDown = (event: PointerEvent) => {
      if (event.button !== 0) return;
      target.setPointerCapture(event.pointerId);
      if (held.size === 0) travelPx = 0;
      held.set(event.pointerId, placeOf(event));
      const { view } = store.get();
      if (held.size === 1 && view) {
        grip = pointer?.current.grab?.(toImage(view, placeOf(event)), PICK_REACH_PX / view.scale) ?? null;
      } else {
        grip?.cancel();
        grip = null;
      }
    };
    const onMove = (event: PointerEvent) => {
      const { view } = store.get();
      if (view) pointer?.current.hover?.(toImage(view, placeOf(event)));
      const before = held.get(event.pointerId);
      if (!before) return;
      const now = placeOf(event);
      const other = [...held].find(([id]) => id !== event.pointerId)?.[1];
      held.set(event.pointerId, now);
      travelPx += Math.hypot(now.x - before.x, now.y - before.y);
      if (!other) {
        if (travelPx < CLICK_PX) return;
        if (grip) {
          if (view) grip.move(toImage(view, now));
          return;
        }
        move((size) =>
          store.set({ view: panBy(store.get().view!, now.x - before.x, now.y - before.y, image, size) }),
        );
        return;
      }
      const middle = { x: (now.x + other.x) / 2, y: (now.y + other.y) / 2 };
      const spread = (p: Point) => Math.max(8, Math.hypot(p.x - other.x, p.y - other.y));
      zoom(spread(now) / spread(before), middle);
    };
    const onUp = (event: PointerEvent) => {
      const clicked = held.size === 1 && travelPx < CLICK_PX && event.type === 'pointerup';
      held.delete(event.pointerId);
      const { view } = store.get();
      if (grip) {
        if (view && event.type === 'pointerup') {
          grip.drop(toImage(view, placeOf(event)), travelPx >= CLICK_PX);
        } else grip.cancel();
        grip = null;
        return;
      }
      if (clicked && view) onPick.current(toImage(view, placeOf(event)), PICK_REACH_PX / view.scale);
    };

    const onLeave = () => pointer?.current.hover?.(null);

    target.addEventListener('pointerleave', onLeave);
    target.addEventListener('wheel', onWheel, { passive: false });
    target.addEventListener('pointerdown', onDown);
    target.addEventListener('pointermove', onMove);
    target.addEventListener('pointerup', onUp);
    target.addEventListener('pointercancel', onUp);
    return () => {
      target.removeEventListener('pointerleave', onLeave);
      target.removeEventListener('wheel', onWheel);
      target.removeEventListener('pointerdown', onDown);
      target.removeEventListener('pointermove', onMove);
      target.removeEventListener('pointerup', onUp);
      target.removeEventListener('pointercancel', onUp);
    };
  }, [element, store, image, well, onPick, pointer]);
}

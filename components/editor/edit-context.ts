import type { Point, Size } from '@/components/canvas/view-box';
import type { ViewerStore } from '@/components/canvas/viewer-store';
import type { EditSession } from './edit-session';
import type { RefinedPoint } from './edit-state';

/** What everything that acts on the page of the editor works with. */
export interface EditContext {
  session: EditSession;
  viewer: ViewerStore;
  image: Size;
  /** The detector's fit near a place of a frame; null where it finds no tracer. */
  refine: (frame: number, at: Point) => Promise<RefinedPoint | null>;
  /** Puts the keyboard into the field for a track's number. */
  onFind: () => void;
}

export const upper = (words: string): string => words.charAt(0).toUpperCase() + words.slice(1);
export const framesText = (frames: number): string => (frames === 1 ? 'one frame' : `${frames} frames`);

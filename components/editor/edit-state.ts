import type { Point } from '@/components/canvas/view-box';
import type { AsideGesture } from './log/edit-log';
import type { LinkState } from './log/gesture-sender';
import { EVERY_TRACK, type TrackFilter } from './track-filter';

/** A place looked for by the detector's fit. */
export interface RefinedPoint {
  x: number;
  y: number;
  sx: number;
  sy: number;
  brightness: number | null;
  /** The detector would not have taken it for a spot. */
  faint: boolean;
}

/** What the next click or Enter is for, where it is not picking a track. */
export type Tool =
  | { kind: 'pick' }
  /** `second`: the track that Enter would join. */
  | { kind: 'join'; first: number; second: number | null }
  /** Points of the line that is being drawn in a frame, and where the cross is. */
  | { kind: 'line'; frame: number; points: readonly Point[]; at: Point }
  | {
      kind: 'place';
      purpose: 'add' | 'move';
      /** Null to begin a new track. */
      track: number | null;
      at: Point;
      /** The fit found nothing there: the next Enter puts the point by eye. */
      byEye: boolean;
      busy: boolean;
    };

export const PICK: Tool = { kind: 'pick' };

/** What is said after something was done, and read out. */
export interface Message {
  text: string;
  tone: 'plain' | 'refusal';
  /** Tells two equal messages apart. */
  number: number;
}

export interface EditState {
  tool: Tool;
  /** Frame at which a segment was begun for the class. */
  segmentFrom: number | null;
  ghosts: boolean;
  magnifier: boolean;
  filter: TrackFilter;
  message: Message | null;
  /** What others did last; a line of its own, so that it never takes the place of what one did oneself. */
  news: string | null;
  link: LinkState;
  /** Gestures that are not stored yet. */
  waiting: number;
  /** False where this browser keeps nothing: then the page must stay open until all is stored. */
  keeps: boolean;
  aside: readonly AsideGesture[];
  undoWords: string | null;
  redoWords: string | null;
  revision: number;
  /** Who has signed the analysis off; null while it can be changed. */
  closed: string | null;
  /** Since when results are older than the tracks; null where they fit. */
  staleSince: string | null;
  /** Rises whenever tracks look different. */
  version: number;
}

export const initialEditState = (revision: number, closed: string | null): EditState => ({
  tool: PICK,
  segmentFrom: null,
  ghosts: true,
  magnifier: false,
  filter: EVERY_TRACK,
  message: null,
  news: null,
  link: { kind: 'idle' },
  waiting: 0,
  keeps: true,
  aside: [],
  undoWords: null,
  redoWords: null,
  revision,
  closed,
  staleSince: null,
  version: 0,
});

/** State of the editor outside React, as that of the viewer: keys and pointers change it many times a second. */
export class EditStore {
  private readonly listeners = new Set<() => void>();

  constructor(private state: EditState) {}

  get = (): EditState => this.state;

  subscribe = (listener: () => void): (() => void) => {
    this.listeners.add(listener);
    return () => this.listeners.delete(listener);
  };

  set(change: Partial<EditState>): void {
    const keys = Object.keys(change) as (keyof EditState)[];
    if (keys.every((key) => change[key] === this.state[key])) return;
    this.state = { ...this.state, ...change };
    for (const listener of this.listeners) listener();
  }

  say(text: string, tone: Message['tone'] = 'plain'): void {
    this.set({ message: { text, tone, number: (this.state.message?.number ?? 0) + 1 } });
  }
}

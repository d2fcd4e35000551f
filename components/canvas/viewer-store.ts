import type { Size, ViewBox } from './view-box';

/** What a viewer shows at the moment. */
export interface ViewerState {
  /** The frame asked for. */
  frame: number;
  /** The frame whose picture is on the canvas; behind `frame` while pictures come in. */
  shown: number;
  /** Where the person is going: 1 forwards, -1 backwards. */
  direction: 1 | -1;
  playing: boolean;
  /** Null until the well is on the page. */
  well: Size | null;
  view: ViewBox | null;
  /** Larger than the whole frame. */
  zoomed: boolean;
  /** Counts drawn as black and white. */
  low: number;
  high: number;
  /** How brightness between black and white is shown. */
  brightness: 'linear' | 'log';
  chosenTrack: number | null;
  chosenEvent: number | null;
  /** A track to bring into the middle as soon as its place is known; null when that is done. */
  bring: number | null;
}

/**
 * State of one frame viewer, outside React: a scrub changes it many times a second and only the
 * canvas and a few small texts follow.
 */
export class ViewerStore {
  private state: ViewerState;
  private readonly listeners = new Set<() => void>();

  constructor(
    readonly frames: number,
    initial: { frame?: number; low: number; high: number },
  ) {
    const frame = this.inside(initial.frame ?? 0);
    this.state = {
      frame,
      shown: frame,
      direction: 1,
      playing: false,
      well: null,
      view: null,
      zoomed: false,
      low: initial.low,
      high: initial.high,
      brightness: 'linear',
      chosenTrack: null,
      chosenEvent: null,
      bring: null,
    };
  }

  get = (): ViewerState => this.state;

  subscribe = (listener: () => void): (() => void) => {
    this.listeners.add(listener);
    return () => this.listeners.delete(listener);
  };

  set(change: Partial<ViewerState>): void {
    const next = { ...this.state, ...change };
    const keys = Object.keys(change) as (keyof ViewerState)[];
    if (keys.every((key) => next[key] === this.state[key])) return;
    this.state = next;
    for (const listener of this.listeners) listener();
  }

  /** Goes to a frame, kept inside the recording. */
  goTo(frame: number): void {
    const next = this.inside(frame);
    if (next === this.state.frame) return;
    this.set({ frame: next, direction: next > this.state.frame ? 1 : -1 });
  }

  step(frames: number): void {
    this.goTo(this.state.frame + frames);
  }

  private inside(frame: number): number {
    return Math.max(0, Math.min(this.frames - 1, Math.round(frame)));
  }
}

import { prefetchOrder } from './prefetch-order';

/** What a cached picture must be able to do; an ImageBitmap does. */
export interface Closable {
  close(): void;
}

export interface FrameCacheOptions<T extends Closable> {
  frames: number;
  /** Loads one frame; rejects when it can't, or when it was told to stop. */
  load: (frame: number, signal: AbortSignal) => Promise<T>;
  /** Told when a frame has come in or could not be had. */
  onChange: (frame: number) => void;
  /** Pictures kept. */
  capacity?: number;
  /** Requests in flight; browsers open six connections to a host and others need some. */
  parallel?: number;
}

/**
 * Decoded frames around the one shown. Loads ahead in the direction of travel, drops what was used
 * longest ago, and gives up requests that are no longer wanted.
 */
export class FrameCache<T extends Closable> {
  private readonly kept = new Map<number, T>();
  private readonly flights = new Map<number, AbortController>();
  private readonly failures = new Map<number, Error>();
  /** Kept, but overtaken: shown until the new one is here. */
  private readonly overtaken = new Set<number>();
  private wanted: number[] = [];
  private shown = -1;
  private closed = false;
  private readonly capacity: number;
  private readonly parallel: number;

  constructor(private readonly options: FrameCacheOptions<T>) {
    this.capacity = options.capacity ?? 60;
    this.parallel = options.parallel ?? 4;
  }

  /** The picture of a frame if it is here. Asking marks it as used. */
  get(frame: number): T | null {
    const found = this.kept.get(frame);
    if (!found) return null;
    this.kept.delete(frame);
    this.kept.set(frame, found);
    return found;
  }

  /** Why a frame could not be had; null when it can or was not asked for yet. */
  failure(frame: number): Error | null {
    return this.failures.get(frame) ?? null;
  }

  /** Says which frame is shown and where the person is going. */
  want(frame: number, direction: 1 | -1): void {
    this.shown = frame;
    // A little room is left for frames that are still drawn while the wanted ones come in.
    const reach = Math.max(1, Math.floor(this.capacity * 0.6));
    this.wanted = prefetchOrder(frame, direction, this.options.frames, reach);
    const wanted = new Set(this.wanted);
    for (const [other, flight] of this.flights) if (!wanted.has(other)) flight.abort();
    this.fill();
  }

  /** Forgets that a frame could not be had and asks for it again. */
  retry(frame: number): void {
    this.failures.delete(frame);
    this.fill();
  }

  /** What is kept, in no order. */
  values(): T[] {
    return [...this.kept.values()];
  }

  /** Has everything that is wanted loaded anew; what is kept is shown until then, and the rest is dropped. */
  renew(): void {
    for (const flight of this.flights.values()) flight.abort();
    const wanted = new Set(this.wanted);
    for (const [frame, picture] of this.kept) {
      if (wanted.has(frame)) this.overtaken.add(frame);
      else {
        this.kept.delete(frame);
        picture.close();
      }
    }
    this.failures.clear();
    this.fill();
  }

  /** Frees everything; nothing is loaded afterwards. */
  close(): void {
    this.closed = true;
    for (const flight of this.flights.values()) flight.abort();
    for (const picture of this.kept.values()) picture.close();
    this.kept.clear();
  }

  private fill(): void {
    if (this.closed) return;
    for (const frame of this.wanted) {
      if (this.flights.size >= this.parallel) return;
      if (this.kept.has(frame) && !this.overtaken.has(frame)) continue;
      if (this.flights.has(frame) || this.failures.has(frame)) continue;
      void this.fetchFrame(frame);
    }
  }

  private async fetchFrame(frame: number): Promise<void> {
    const flight = new AbortController();
    this.flights.set(frame, flight);
    try {
      const picture = await this.options.load(frame, flight.signal);
      // What was asked for before it was overtaken must not pass for the new one.
      if (this.closed || (flight.signal.aborted && this.overtaken.has(frame))) {
        picture.close();
        return;
      }
      this.kept.get(frame)?.close();
      this.kept.set(frame, picture);
      this.overtaken.delete(frame);
      this.evict();
      this.options.onChange(frame);
    } catch (error) {
      if (this.closed || flight.signal.aborted) return;
      this.failures.set(frame, error instanceof Error ? error : new Error(String(error)));
      this.options.onChange(frame);
    } finally {
      this.flights.delete(frame);
      this.fill();
    }
  }

  private evict(): void {
    for (const [frame, picture] of this.kept) {
      if (this.kept.size <= this.capacity) return;
      if (frame === this.shown) continue;
      this.kept.delete(frame);
      this.overtaken.delete(frame);
      picture.close();
    }
  }
}

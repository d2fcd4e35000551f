import { FrameCache } from './frame-cache';
import type { TrackBlock } from './track-block';

/** A trail is the path of the last frames, this many. */
export const TRAIL_FRAMES = 30;
/** Frames of a block; with the trail before them, one block has all that is drawn at each of its frames. */
const BLOCK_FRAMES = 50;
const BLOCKS_KEPT = 8;

interface Held {
  block: TrackBlock;
  close(): void;
}

/** Tracks around the frame shown, fetched block by block ahead of the person. */
export class TrackBlocks {
  private readonly cache: FrameCache<Held>;

  /** @param load answers with the tracks of the frames `from .. to`, both included. */
  constructor(
    private readonly frames: number,
    load: (from: number, to: number, signal: AbortSignal) => Promise<TrackBlock>,
    onChange: () => void,
  ) {
    this.cache = new FrameCache<Held>({
      frames: Math.ceil(frames / BLOCK_FRAMES),
      capacity: BLOCKS_KEPT,
      parallel: 2,
      onChange,
      load: async (index, signal) => {
        const from = Math.max(0, index * BLOCK_FRAMES - TRAIL_FRAMES + 1);
        const to = Math.min(this.frames - 1, (index + 1) * BLOCK_FRAMES - 1);
        return { block: await load(from, to, signal), close: () => undefined };
      },
    });
  }

  /** The block that draws a frame; null while it is on its way. */
  at(frame: number): TrackBlock | null {
    return this.cache.get(Math.floor(frame / BLOCK_FRAMES))?.block ?? null;
  }

  /** The blocks that are here. */
  kept(): TrackBlock[] {
    return this.cache.values().map(({ block }) => block);
  }

  /** Fetches the blocks anew; those that are here are shown until then. */
  renew(): void {
    this.cache.renew();
  }

  failure(frame: number): Error | null {
    return this.cache.failure(Math.floor(frame / BLOCK_FRAMES));
  }

  want(frame: number, direction: 1 | -1): void {
    this.cache.want(Math.floor(frame / BLOCK_FRAMES), direction);
  }

  retry(frame: number): void {
    this.cache.retry(Math.floor(frame / BLOCK_FRAMES));
  }

  close(): void {
    this.cache.close();
  }
}

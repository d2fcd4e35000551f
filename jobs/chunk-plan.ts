/** Pixels that a worker surely goes through within 20 s: what a killed worker can lose at most. */
const CHUNK_PIXELS_MOST = 60_000_000;

/** So many workers can share a recording that is long enough. */
const CHUNKS_LEAST = 8;

/** Frames per chunk: short enough to lose little, many enough to share. */
export function chunkFramesFor(frames: number, widthPx: number, heightPx: number): number {
  const byTime = Math.floor(CHUNK_PIXELS_MOST / (widthPx * heightPx));
  return Math.max(1, Math.min(byTime, Math.ceil(frames / CHUNKS_LEAST)));
}

export interface Chunk {
  chunk: number;
  firstFrame: number;
  frames: number;
}

/** The chunks of a recording in order; together they hold every frame once. */
export function chunksOf(frames: number, chunkFrames: number): Chunk[] {
  return Array.from({ length: Math.ceil(frames / chunkFrames) }, (_, chunk) => ({
    chunk,
    firstFrame: chunk * chunkFrames,
    frames: Math.min(chunkFrames, frames - chunk * chunkFrames),
  }));
}

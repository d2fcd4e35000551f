import { type FrameLayout, rowBytes } from './frame-layout';

export interface ChunkGrid {
  across: number;
  down: number;
}

/** Strips or tiles of one plane. */
export function chunkGrid(layout: FrameLayout, width: number, height: number): ChunkGrid {
  return {
    across: Math.ceil(width / layout.chunkWidth),
    down: Math.ceil(height / layout.chunkHeight),
  };
}

/** Rows that chunk row `j` holds: the last strip is short, tiles are always full. */
export function chunkRows(layout: FrameLayout, height: number, j: number): number {
  return layout.tiled ? layout.chunkHeight : Math.min(layout.chunkHeight, height - j * layout.chunkHeight);
}

/** Bytes that the chunk of row `j` needs once decompressed. */
export function chunkBytes(layout: FrameLayout, height: number, j: number): number {
  return chunkRows(layout, height, j) * rowBytes(layout.chunkWidth, layout);
}

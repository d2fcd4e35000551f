import type { BackgroundDrift, ImageModel } from '../types';
import { paintBlocks } from './block-grid';

/**
 * Background of a frame, electrons per pixel, but for its brightness as a whole: along straight
 * lines between the model's nodes in time and between the middles of its blocks in space. Depends
 * on the model and the frame's number alone.
 *
 * @param out receives it, length width * height.
 * @throws RangeError when `out` has another length than the image.
 */
export function backgroundOfFrame(model: ImageModel, frameIndex: number, out: Float32Array): void {
  const { width, height, backgroundE, backgroundDrift: drift } = model;
  if (out.length !== width * height) {
    throw new RangeError(`The background needs ${width * height} numbers of room. Received ${out.length}.`);
  }
  if (!drift) {
    out.set(backgroundE);
    return;
  }
  const { columns, rows } = drift;
  const blocks = new Float64Array(columns * rows);
  blocksOfFrame(drift, frameIndex, blocks);
  paintBlocks(blocks, { width, height, columns, rows }, out);
  // Straight lines carried on to the border may fall below no light at all.
  for (let i = 0; i < out.length; i++) if (out[i] < 0) out[i] = 0;
}

/** Blocks of the background of a frame, along straight lines between the nodes in time. */
export function blocksOfFrame(
  { nodeFrames, blocksE }: BackgroundDrift,
  frameIndex: number,
  blocks: Float64Array,
): void {
  const last = nodeFrames.length - 1;
  let k = 0;
  while (k < last - 1 && frameIndex >= nodeFrames[k + 1]) k++;
  const place = (frameIndex - nodeFrames[k]) / (nodeFrames[k + 1] - nodeFrames[k]);
  const share = Math.max(0, Math.min(1, place));
  const from = k * blocks.length;
  for (let b = 0; b < blocks.length; b++) {
    const before = blocksE[from + b];
    blocks[b] = before + share * (blocksE[from + blocks.length + b] - before);
  }
}

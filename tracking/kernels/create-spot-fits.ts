import { createPlainSpotFits, type SpotFitsOptions } from '../detection/plain-spot-fits';
import type { SpotFits } from '../detection/spot-fits';
import type { JointFitRoom } from './joint-fit-memory';
import { createSimdSpotFits } from './joint-fit-simd';
import type { FrameKernels } from './kernels';

/**
 * Joint fits in the frame that the kernels have at hand, by the kind of kernels that they are.
 *
 * @param room what was asked for as `scratchBytes` when the kernels were made.
 */
export function createSpotFits(frame: FrameKernels, options: SpotFitsOptions, room: JointFitRoom): SpotFits {
  if (frame.compiled) return createSimdSpotFits(frame.compiled, frame.kernel, options, room);
  if (frame.plain) return createPlainSpotFits(frame.plain, options);
  throw new Error('These kernels hold no frame to fit spots in.');
}

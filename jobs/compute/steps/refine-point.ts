import { openStack } from '@/stacks/open-stack';
import { createDetector, type Detector } from '@/tracking/detect';
import { decodeImageModel } from '../encode-image-model';
import { kernelsOfThisProcess } from '../kernels';
import type { RefinePointInput, RefinePointOutput } from '../tasks';

/** A person points at a tracer, not past it: within so many spot sizes, at least so many px. */
const REACH_SIGMAS = 3;
const REACH_LEAST_PX = 3;

// A person who adds points stays with one analysis.
let last: { key: string; detector: Detector } | null = null;

/** The position of the tracer near a place, by the detector of the analysis itself. */
export async function refinePoint(input: RefinePointInput): Promise<RefinePointOutput> {
  const { modelKey, model, recipe, stackDir, frame, xPx, yPx } = input;
  if (last?.key !== modelKey) {
    last = {
      key: modelKey,
      detector: createDetector(decodeImageModel(model), recipe, kernelsOfThisProcess()),
    };
  }
  const stack = await openStack(stackDir);
  try {
    const picture = await stack.readFrame(frame);
    const reachPx = Math.max(REACH_LEAST_PX, REACH_SIGMAS * recipe.spotSizePx);
    return { spot: last.detector.placeAt(picture, frame, xPx, yPx, reachPx) };
  } finally {
    await stack.close();
  }
}

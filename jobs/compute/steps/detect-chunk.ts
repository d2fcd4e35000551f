import { openStack } from '@/stacks/open-stack';
import { readAhead } from '@/stacks/read-ahead';
import { createDetector } from '@/tracking/detect';
import { createSpotSink, encodeSpots } from '@/tracking/spots';
import { decodeImageModel } from '../encode-image-model';
import { kernelsOfThisProcess } from '../kernels';
import type { DetectChunkInput, DetectChunkOutput } from '../tasks';
import type { WorkContext } from './work-context';

// Buffers of the detector are worth keeping from chunk to chunk of the same analysis.
let last: { key: string; detector: ReturnType<typeof createDetector> } | null = null;

function detectorFor({ modelKey, model, recipe }: DetectChunkInput): ReturnType<typeof createDetector> {
  if (last?.key !== modelKey)
    last = {
      key: modelKey,
      detector: createDetector(decodeImageModel(model), recipe, kernelsOfThisProcess()),
    };
  return last.detector;
}

/** Spots of a chunk of frames. Every frame is judged by itself, so the cut doesn't matter. */
export async function detectChunk(
  input: DetectChunkInput,
  { onProgress }: WorkContext,
): Promise<DetectChunkOutput> {
  const began = performance.now();
  const { firstFrame, frames } = input;
  const detector = detectorFor(input);
  const stack = await openStack(input.stackDir);
  const sink = createSpotSink();
  const spotsPerFrame: number[] = [];
  let readingMs = 0;
  try {
    let frame = firstFrame;
    let from = performance.now();
    for await (const picture of readAhead(stack, firstFrame, firstFrame + frames)) {
      readingMs += performance.now() - from;
      const before = sink.count;
      detector.detect(picture, frame++, sink);
      spotsPerFrame.push(sink.count - before);
      onProgress((frame - firstFrame) / frames);
      from = performance.now();
    }
  } finally {
    await stack.close();
  }
  const spots = encodeSpots(sink.spots());
  return { spots, spotCount: sink.count, spotsPerFrame, readingMs, tookMs: performance.now() - began };
}

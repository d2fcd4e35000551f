import { kernelsOfThisProcess } from '@/jobs/compute/kernels';
import type { StackReader } from '@/stacks/open-stack';
import { measuredTracks } from '@/tracking/assess/measured-tracks';
import { createDetector } from '@/tracking/detect';
import { createMatchedFilter } from '@/tracking/detection/matched-filter';
import { linkSpots } from '@/tracking/link';
import { measureImage, pickModelFrames } from '@/tracking/measure-image';
import { resolveRecipe } from '@/tracking/recipe';
import { createSpotSink } from '@/tracking/spots';
import type { Frame, Recipe, Tracks } from '@/tracking/types';
import type { PipelineRun } from './pipeline-run';

const MICRO = 1e-6;
const LINKINGS_COLD = 4;

/** CPU time of a piece of work in this process, s: other programs on the machine don't count. */
async function cpuSeconds(work: () => void | Promise<void>): Promise<number> {
  const before = process.cpuUsage();
  await work();
  const { user, system } = process.cpuUsage(before);
  return MICRO * (user + system);
}

/** The core on one thread, every setting automatic but the effort; frames come from the indexed stack. */
export async function runCore(stack: StackReader, effort: Recipe['effort']): Promise<PipelineRun> {
  const { width, height, frames } = stack;
  const pixels = width * height;
  const room: Frame = { width, height, counts: new Float32Array(pixels) };
  const reading = await cpuSeconds(async () => {
    for (let f = 0; f < frames; f++) await stack.readFrame(f, room);
  });

  const picked: Frame[] = [];
  for (const f of pickModelFrames(frames, pixels)) picked.push(await stack.readFrame(f));
  let model = measureImage(picked.slice(0, 2), { effort });
  const measuring = await cpuSeconds(() => {
    model = measureImage(picked, { effort });
  });
  const recipe = resolveRecipe({ effort }, { ...model, frames, pixelSizeM: 1e-5 });

  const matched = createMatchedFilter(width, height, recipe.spotSizePx);
  const response = new Float32Array(pixels);
  const filter = await cpuSeconds(() => {
    for (let f = 0; f < frames; f++) matched.apply(room.counts, response);
  });

  const detector = createDetector(model, recipe, kernelsOfThisProcess());
  const sink = createSpotSink();
  const throughReading = await cpuSeconds(async () => {
    for (let f = 0; f < frames; f++) {
      await stack.readFrame(f, room);
      detector.detect(room, f, sink);
    }
  });
  const detection = Math.max(0, throughReading - reading);
  const spots = sink.spots();
  // One call links the whole recording, so it takes a few until the compiler is done with it.
  for (let i = 0; i < LINKINGS_COLD; i++) linkSpots(spots, { frames, width, height }, recipe);
  let tracks: Tracks | null = null;
  const linking = await cpuSeconds(() => {
    tracks = linkSpots(spots, { frames, width, height }, recipe);
  });
  const made = tracks as Tracks | null;
  if (!made) throw new Error('Linking gave nothing.');
  return {
    name: `${effort} effort`,
    seconds: { reading, measuring, filter, detection, linking, whole: measuring + throughReading + linking },
    spots: spots.count,
    links: made.frame.length - made.count,
    peakMB: Number.NaN,
    points: measuredTracks(made),
  };
}

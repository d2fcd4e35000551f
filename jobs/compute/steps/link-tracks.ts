import { linkSpots } from '@/tracking/link';
import { takeEncodedRuns } from '@/tracking/spots';
import type { Tracks } from '@/tracking/types';
import type { LinkTracksInput } from '../tasks';
import type { WorkContext } from './work-context';

/** Tracks through the spots of all chunks; one process sees them all, so the cut doesn't matter. */
export async function linkTracks(
  { chunks, image, recipe }: LinkTracksInput,
  context: WorkContext,
): Promise<Tracks> {
  // The chunks are views of one message, whose memory can go when the last one is decoded.
  const spots = takeEncodedRuns(chunks);
  context.onProgress(0.1);
  return linkSpots(spots, image, recipe);
}

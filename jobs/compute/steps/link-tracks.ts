import { linkSpots } from '@/tracking/link';
import { concatSpots, decodeSpots } from '@/tracking/spots';
import type { Tracks } from '@/tracking/types';
import type { LinkTracksInput } from '../tasks';
import type { WorkContext } from './work-context';

/** Tracks through the spots of all chunks; one process sees them all, so the cut doesn't matter. */
export async function linkTracks(
  { chunks, image, recipe }: LinkTracksInput,
  context: WorkContext,
): Promise<Tracks> {
  // Copies: a view into a larger buffer can't be decoded in place.
  const spots = concatSpots(chunks.map((chunk) => decodeSpots(new Uint8Array(chunk))));
  context.onProgress(0.1);
  return linkSpots(spots, image, recipe);
}

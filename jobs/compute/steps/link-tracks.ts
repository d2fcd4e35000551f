import { linkSource, linkSpots } from '@/tracking/link';
import { takeEncodedRuns } from '@/tracking/spots';
import type { Tracks } from '@/tracking/types';
import { openSpotFiles } from '../spot-files';
import type { LinkFilesInput, LinkFilesOutput, LinkTracksInput } from '../tasks';
import { TrackFileWriter } from '../track-file';
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

/** The same from files to a file: neither spots nor tracks are ever held as a whole. */
export async function linkFiles(
  { chunkPaths, tracksPath, image, recipe }: LinkFilesInput,
  context: WorkContext,
): Promise<LinkFilesOutput> {
  const source = openSpotFiles(chunkPaths, image.frames);
  try {
    context.onProgress(0.1);
    const { count, points, pieces } = linkSource(source, image, recipe);
    const writer = await TrackFileWriter.create(tracksPath, { tracks: count, points });
    for (const piece of pieces()) await writer.append(piece);
    await writer.close();
    return { tracks: count, points };
  } finally {
    source.close();
  }
}

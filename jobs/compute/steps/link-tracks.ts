import { linkSource } from '@/tracking/link';
import { openSpotFiles } from '../spot-files';
import type { LinkTracksInput, LinkTracksOutput } from '../tasks';
import { TrackFileWriter } from '../track-file';
import type { WorkContext } from './work-context';

/**
 * Tracks through the spots of all chunks; one process sees them all, so the cut doesn't matter. From files to a
 * file: neither spots nor tracks are ever held as a whole.
 */
export async function linkTracks(
  { chunkPaths, tracksPath, image, recipe }: LinkTracksInput,
  context: WorkContext,
): Promise<LinkTracksOutput> {
  const source = openSpotFiles(chunkPaths, image.frames);
  try {
    context.onProgress(0.1);
    const { count, points, pieces } = linkSource(source, image, recipe);
    const writer = await TrackFileWriter.create(tracksPath, { tracks: count, points });
    try {
      for (const piece of pieces()) await writer.append(piece);
      await writer.close();
    } catch (cause) {
      await writer.abandon();
      throw cause;
    }
    return { tracks: count, points };
  } finally {
    source.close();
  }
}

import { mkdir, readdir, rename, rm, writeFile } from 'node:fs/promises';
import { existsSync } from 'node:fs';
import { join } from 'node:path';
import { streamTracks } from '@/models/queries/read-tracks';
import { streamSpotChunks } from '@/models/queries/spot-chunks';
import { countLinked } from '@/models/queries/track-counts';
import { packTracks } from '@/tracking/corrections/pieces';
import type { TrackSlice } from '@/tracking/track-slice';
import { TrackFileWriter } from './compute/track-file';

/** The tracks as linking made them; corrections make later revisions. */
const AS_LINKED = 0;

/** Points that are written at once: a megabyte or two. */
const PIECE_POINTS = 50_000;

/** Where a worker keeps the tracks of an analysis as linking made them, see `readTrackFile`. */
const tracksPath = (folder: string, analysisId: string): string => join(folder, `tracks-${analysisId}.bin`);

/** Where computing writes them; they count only once they are whole. */
export const unfinishedTracksPath = (folder: string, analysisId: string): string =>
  `${tracksPath(folder, analysisId)}.part`;

/** Spots of all chunks of an analysis as files in a worker's emptied folder, in order. @returns their paths */
export async function handSpots(folder: string, labId: string, analysisId: string): Promise<string[]> {
  await emptyFolder(folder);
  const paths: string[] = [];
  for await (const spots of streamSpotChunks(labId, analysisId)) {
    const path = join(folder, `spots-${paths.length}.bin`);
    await writeFile(path, spots);
    paths.push(path);
  }
  return paths;
}

/** Takes what computing wrote for the tracks of the analysis. @returns their path */
export async function keepTracks(folder: string, analysisId: string): Promise<string> {
  const path = tracksPath(folder, analysisId);
  await rename(unfinishedTracksPath(folder, analysisId), path);
  return path;
}

/**
 * Path of the tracks of an analysis as linking made them. They are fetched only when this worker neither made nor
 * used them last; linking gives the same tracks however often it is run, so a file of them is never outdated.
 */
export async function handTracks(folder: string, labId: string, analysisId: string): Promise<string> {
  const path = tracksPath(folder, analysisId);
  if (existsSync(path)) return path;
  await emptyFolder(folder);
  const { tracks, trackPoints } = await countLinked(analysisId);
  const unfinished = unfinishedTracksPath(folder, analysisId);
  const writer = await TrackFileWriter.create(unfinished, { tracks, points: trackPoints });
  try {
    for await (const piece of piecesOf(streamTracks(labId, analysisId, AS_LINKED))) {
      await writer.append(packTracks(piece).tracks);
    }
    await writer.close();
  } catch (cause) {
    await writer.abandon();
    throw cause;
  }
  return keepTracks(folder, analysisId);
}

async function* piecesOf(tracks: AsyncIterable<TrackSlice>): AsyncGenerator<TrackSlice[]> {
  let piece: TrackSlice[] = [];
  let points = 0;
  for await (const track of tracks) {
    piece.push(track);
    points += track.frame.length;
    if (points < PIECE_POINTS) continue;
    yield piece;
    piece = [];
    points = 0;
  }
  if (piece.length > 0) yield piece;
}

async function emptyFolder(folder: string): Promise<void> {
  await mkdir(folder, { recursive: true, mode: 0o700 });
  for (const name of await readdir(folder)) await rm(join(folder, name), { recursive: true });
}

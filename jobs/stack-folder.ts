import { join } from 'node:path';
import { dataDir } from '@/lib/env';

/** Where the bytes of a recording, its frame index and its previews lie. */
export const stackFolder = (recordingId: string): string => join(dataDir(), 'stacks', recordingId);

/** The stack of a recording that came as one file. */
export const stackFile = (recordingId: string): string => join(stackFolder(recordingId), 'stack.bin');

/** What a rehearsal's recording was made of; other recordings have none. */
export const truthFile = (recordingId: string): string => join(stackFolder(recordingId), 'truth.bin');

/** One file of a recording that came as a folder; positions count from 0. */
export const folderFile = (recordingId: string, position: number): string =>
  join(stackFolder(recordingId), 'files', `${String(position).padStart(6, '0')}.bin`);

/** Frames shown small in lists and on the run's page: previews 0 to 3, spread over the recording. */
export const PREVIEWS = 4;
export const previewFile = (recordingId: string, preview: number): string =>
  join(stackFolder(recordingId), `preview-${preview}.webp`);

/** A strip of eight frames side by side. */
export const stripFile = (recordingId: string): string => join(stackFolder(recordingId), 'strip.png');

/** Strips of candidates, made anew when the tracks change. */
export const candidateStripFile = (
  recordingId: string,
  candidateId: string,
  tracksRevision: number,
): string => join(stackFolder(recordingId), 'candidates', `${candidateId}-${tracksRevision}.png`);

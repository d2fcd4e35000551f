import type { UploadView } from '../views/recording-view';

/** Uploads that the server holds and nobody sends at the moment, one per recording. */
export interface ArrivingRecording {
  recordingId: string;
  folderId: string | null;
  /** Name of the file, or of one of the folder's files. */
  filename: string;
  bytes: number;
  receivedBytes: number;
  expiresAt: string | null;
  uploads: UploadView[];
}

/** Groups the files of a folder; what `busy` names is being sent from this page and left out. */
export function arrivingRecordings(
  uploads: readonly UploadView[],
  busy: ReadonlySet<string>,
): ArrivingRecording[] {
  const groups = new Map<string, ArrivingRecording>();
  for (const upload of uploads) {
    if (busy.has(upload.recordingId)) continue;
    const found = groups.get(upload.recordingId);
    if (found) {
      found.bytes += upload.bytes;
      found.receivedBytes += upload.receivedBytes;
      found.uploads.push(upload);
      continue;
    }
    const { recordingId, folderId, filename, bytes, receivedBytes, expiresAt } = upload;
    groups.set(recordingId, {
      recordingId,
      folderId,
      filename,
      bytes,
      receivedBytes,
      expiresAt,
      uploads: [upload],
    });
  }
  return [...groups.values()];
}

/** Whole percent, rounded down: 100 only when everything is there. */
export function percentOf(part: number, whole: number): number {
  if (!(whole > 0)) return 0;
  return part >= whole ? 100 : Math.max(0, Math.floor((part / whole) * 100));
}

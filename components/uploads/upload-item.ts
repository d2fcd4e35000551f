/** `reading`: its checksum is being computed before it is sent. */
export type UploadState = 'waiting' | 'reading' | 'sending' | 'paused' | 'received' | 'failed';

/** A stack on its way, as a row shows it. */
export interface UploadItem {
  key: string;
  name: string;
  kind: 'file' | 'folder';
  state: UploadState;
  bytes: number;
  sentBytes: number;
  /** Bytes read for the checksum. */
  readBytes: number;
  bytesPerS: number | null;
  secondsLeft: number | null;
  /** Files of a folder, and how many are safe. */
  files: number;
  filesDone: number;
  /** Files of the folder that are not frames. */
  leftOut: number;
  /** What went wrong, and what to do. */
  message: string | null;
  recordingId: string | null;
  /** Checksum computed here, of a single file; null until it is known. */
  sha256: string | null;
}

export const newItem = (key: string, name: string, kind: UploadItem['kind'], bytes: number): UploadItem => ({
  key,
  name,
  kind,
  bytes,
  state: 'waiting',
  sentBytes: 0,
  readBytes: 0,
  bytesPerS: null,
  secondsLeft: null,
  files: 1,
  filesDone: 0,
  leftOut: 0,
  message: null,
  recordingId: null,
  sha256: null,
});

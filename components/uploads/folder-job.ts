import { api, ApiError } from '@/components/data/api-client';
import type { FolderEntry } from '@/lib/uploads/folder-files';
import type { UploadMemory } from '@/lib/uploads/upload-memory';
import type { RecordingView, UploadView } from '@/lib/views/recording-view';
import { SendError, sendFile } from './send-file';
import type { UploadItem } from './upload-item';
import { UploadJob, type Tell } from './upload-job';

/** Frames are small: several on the way at once keep a long line full. */
const PARALLEL_FILES = 3;
/** The server has the file of this position already. */
const ALREADY_THERE = 409;

interface FolderJobOptions {
  runId: string;
  /** Frames in their order; the place in the list is the frame's position. */
  frames: readonly FolderEntry<File>[];
  memory: UploadMemory;
  /** A folder that was announced earlier, with its uploads that are not complete. */
  earlier?: { folderId: string; recordingId: string; uploads: readonly UploadView[] };
}

/** Key under which an announced folder is remembered, so that choosing it again goes on with it. */
export const folderKey = (runId: string, name: string, files: number, bytes: number) =>
  `folder ${runId} ${files} ${bytes} ${name}`;

/** Sends a folder of frames as one recording. */
export class FolderJob extends UploadJob {
  /** Bytes of the files at work, by position. */
  private readonly partial = new Map<number, number>();
  private safeBytes = 0;
  private filesDone = 0;
  private next = 0;

  constructor(
    item: UploadItem,
    tell: Tell,
    private readonly options: FolderJobOptions,
  ) {
    super(item, tell);
  }

  async run(): Promise<void> {
    const { frames, earlier, memory, runId } = this.options;
    const { name, bytes } = this.item;
    const key = folderKey(runId, name, frames.length, bytes);
    try {
      const body = { name, files: frames.length, bytes };
      const folder =
        earlier && (await stillArriving(earlier.recordingId))
          ? { id: earlier.folderId, recordingId: earlier.recordingId }
          : await api<{ id: string; recordingId: string }>(`/api/v1/runs/${runId}/folders`, {
              method: 'POST',
              body,
              idempotencyKey: crypto.randomUUID(),
            });
      memory.set(key, JSON.stringify(folder));
      this.say({ recordingId: folder.recordingId, state: 'sending' });
      const lanes = Array.from({ length: PARALLEL_FILES }, () => this.lane(folder.id));
      await Promise.all(lanes);
      if (this.stop.signal.aborted) return;
      memory.forget(key);
      this.say({ state: 'received', sentBytes: bytes, bytesPerS: null, secondsLeft: null, message: null });
    } catch (error) {
      this.fail(error);
      this.stop.abort();
      for (const sending of this.sendings) sending.pause();
    }
  }

  private async lane(folderId: string): Promise<void> {
    while (this.next < this.options.frames.length && !this.stop.signal.aborted) {
      const position = this.next;
      this.next += 1;
      await this.sendFrame(folderId, position);
    }
  }

  /** Sends a frame, as often as the link is lost, each time after the person has said to go on. */
  private async sendFrame(folderId: string, position: number): Promise<void> {
    const { frames, earlier, runId } = this.options;
    const { file, path } = frames[position];
    let uploadUrl = earlier?.uploads.find((upload) => upload.position === position)?.id;
    if (uploadUrl) uploadUrl = `/api/v1/uploads/${uploadUrl}`;
    for (;;) {
      await this.whileHeld();
      if (this.stop.signal.aborted) return;
      const sending = sendFile({
        file,
        uploadUrl,
        metadata: {
          filename: path.split('/').at(-1) ?? file.name,
          run: runId,
          folder: folderId,
          position: String(position),
        },
        onBytes: (sent) => this.count(position, sent),
        onRetry: () => this.sayRetry(),
        onRecording: () => undefined,
        onUploadUrl: (url) => (uploadUrl = url),
      });
      this.sendings.add(sending);
      try {
        await sending.done;
        break;
      } catch (error) {
        if (error instanceof SendError && error.status === ALREADY_THERE && !uploadUrl) break;
        if (!(error instanceof SendError) || error.status !== 0) throw error;
        this.holdLost();
      } finally {
        this.sendings.delete(sending);
      }
    }
    this.partial.delete(position);
    this.safeBytes += file.size;
    this.filesDone += 1;
    this.say({ filesDone: this.filesDone });
    this.count(position, 0);
  }

  private count(position: number, sent: number): void {
    if (sent > 0) this.partial.set(position, sent);
    let under = 0;
    for (const bytes of this.partial.values()) under += bytes;
    this.sayBytes(this.safeBytes + under);
  }
}

/** Whether a folder that this browser remembers can still take files. */
async function stillArriving(recordingId: string): Promise<boolean> {
  try {
    const { state } = await api<RecordingView>(`/api/v1/recordings/${recordingId}`);
    return state === 'arriving';
  } catch (error) {
    if (error instanceof ApiError && error.status === 404) return false;
    throw error;
  }
}

import { fingerprintOf } from '@/lib/uploads/fingerprint';
import type { UploadMemory } from '@/lib/uploads/upload-memory';
import { hashFile } from './hash-file';
import { SendError, sendFile } from './send-file';
import type { UploadItem } from './upload-item';
import { UploadJob, type Tell } from './upload-job';

/**
 * Files up to this size are read for their checksum before they are sent, so that the server can
 * compare; longer ones are read beside it, and this page compares.
 */
const READ_FIRST_BYTES = 256 * 1024 * 1024;

interface FileJobOptions {
  runId: string;
  file: File;
  memory: UploadMemory;
  /** Id of an upload begun earlier. */
  uploadId?: string;
}

/** Key under which the fingerprint of an upload's file is remembered. */
export const memoryKey = (recordingId: string) => `file ${recordingId}`;

/** Sends one file as one recording. */
export class FileJob extends UploadJob {
  constructor(
    item: UploadItem,
    tell: Tell,
    private readonly options: FileJobOptions,
  ) {
    super(item, tell);
  }

  async run(): Promise<void> {
    const { file, uploadId } = this.options;
    try {
      const hash = hashFile(file, this.stop.signal, (readBytes) => this.say({ readBytes }));
      // A file that can't be read fails while it is sent, too; that failure is the one to report.
      const known = hash.then((sha256) => this.say({ sha256 })).catch(() => undefined);
      if (!uploadId && file.size <= READ_FIRST_BYTES) {
        this.say({ state: 'reading' });
        await known;
      }
      if (this.stop.signal.aborted) return;
      await this.send();
      if (this.stop.signal.aborted) return;
      this.say({
        state: 'received',
        sentBytes: file.size,
        bytesPerS: null,
        secondsLeft: null,
        message: null,
      });
    } catch (error) {
      this.fail(error);
    }
  }

  /** Sends until all is there; a lost link waits for the person and goes on where the server stands. */
  private async send(): Promise<void> {
    const { file, runId, uploadId, memory } = this.options;
    const { ends } = await fingerprintOf(file);
    const { sha256 } = this.item;
    let uploadUrl = uploadId ? `/api/v1/uploads/${uploadId}` : undefined;
    for (;;) {
      await this.whileHeld();
      if (this.stop.signal.aborted) return;
      const sending = sendFile({
        file,
        uploadUrl,
        metadata: { filename: file.name, run: runId, ...(sha256 ? { sha256 } : {}) },
        onBytes: (bytes) => this.sayBytes(bytes),
        onRetry: () => this.sayRetry(),
        onUploadUrl: (url) => (uploadUrl = url),
        onRecording: (recordingId) => {
          if (recordingId === this.item.recordingId) return;
          memory.set(memoryKey(recordingId), ends);
          this.say({ recordingId });
        },
      });
      this.sendings.add(sending);
      this.say({ state: 'sending' });
      try {
        await sending.done;
        break;
      } catch (error) {
        if (!(error instanceof SendError) || error.status !== 0) throw error;
        this.holdLost();
      } finally {
        this.sendings.delete(sending);
      }
    }
    if (this.item.recordingId) memory.forget(memoryKey(this.item.recordingId));
  }
}

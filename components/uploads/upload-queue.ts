import { arrivingRecordings, type ArrivingRecording } from '@/lib/uploads/arriving';
import { fingerprintOf, refuseOtherFile } from '@/lib/uploads/fingerprint';
import { folderNameOf, framesOfFolder, type FolderEntry } from '@/lib/uploads/folder-files';
import type { UploadMemory } from '@/lib/uploads/upload-memory';
import { FileJob, memoryKey } from './file-job';
import { FolderJob, folderKey } from './folder-job';
import { newItem, type UploadItem } from './upload-item';
import type { UploadJob } from './upload-job';

/** Stacks sent at the same time; more would only share the same line. */
const PARALLEL_STACKS = 2;
/** Progress comes with every packet; eyes need it a few times a second. */
const NEWS_MS = 200;

/**
 * Uploads of one run from this page. Lives outside React: rows follow it, a job goes on whatever is
 * drawn.
 */
export class UploadQueue {
  private items: UploadItem[] = [];
  private readonly jobs = new Map<string, UploadJob>();
  private readonly listeners = new Set<() => void>();
  private waiting: string[] = [];
  private running = 0;
  private news: ReturnType<typeof setTimeout> | undefined;
  private snapshot: readonly UploadItem[] = [];
  private count = 0;

  constructor(
    private readonly runId: string,
    private readonly memory: UploadMemory,
  ) {}

  get = (): readonly UploadItem[] => this.snapshot;

  subscribe = (listener: () => void): (() => void) => {
    this.listeners.add(listener);
    return () => this.listeners.delete(listener);
  };

  /** Recordings that this page is sending. */
  busy(): Set<string> {
    return new Set(this.items.flatMap(({ recordingId }) => recordingId ?? []));
  }

  /** True while something would be interrupted by leaving the page. */
  atWork(): boolean {
    return this.items.some(({ state }) => state === 'sending' || state === 'reading' || state === 'waiting');
  }

  /** Sends files, each as a recording; one that the server has in part goes on where it stands. */
  async addFiles(files: readonly File[], arriving: readonly ArrivingRecording[]): Promise<void> {
    for (const file of files) {
      const open = await this.sameUpload(file, arriving);
      if (open) this.startFile(file, open.uploads[0].id, open.recordingId);
      else this.startFile(file);
    }
  }

  /** Sends a folder of frames as one recording. Returns why it can't be, or null. */
  addFolder(entries: readonly FolderEntry<File>[], arriving: readonly ArrivingRecording[]): string | null {
    const name = folderNameOf(entries.map(({ path }) => path));
    const { frames, leftOut } = framesOfFolder(entries);
    if (frames.length === 0) return `${name} has no frames. Send a folder of PNG or TIFF files.`;
    const bytes = frames.reduce((sum, { file }) => sum + file.size, 0);
    const remembered = this.memory.get(folderKey(this.runId, name, frames.length, bytes));
    const folder = remembered ? (JSON.parse(remembered) as { id: string; recordingId: string }) : null;
    const uploads = arriving.find((open) => open.recordingId === folder?.recordingId)?.uploads ?? [];
    this.startFolder(name, frames, leftOut, folder && { ...folder, uploads });
    return null;
  }

  /** Goes on with an upload of another time. Returns why the chosen file can't, or null. */
  async resumeFile(open: ArrivingRecording, file: File): Promise<string | null> {
    const ends = this.memory.get(memoryKey(open.recordingId));
    const expected = { filename: open.filename, bytes: open.bytes, ends };
    const refusal = refuseOtherFile(expected, { name: file.name, ...(await fingerprintOf(file)) });
    if (!refusal) this.startFile(file, open.uploads[0].id, open.recordingId);
    return refusal;
  }

  /** Goes on with a folder of another time: the files that are not complete must be in it. */
  resumeFolder(open: ArrivingRecording, entries: readonly FolderEntry<File>[]): string | null {
    const { frames, leftOut } = framesOfFolder(entries);
    const other = open.uploads.find(({ position, filename, bytes }) => {
      const frame = frames[position ?? -1];
      return !frame || frame.file.size !== bytes || frame.path.split('/').at(-1) !== filename;
    });
    if (other) return `This folder has no ${other.filename} of the same length at its place. Choose the one that was being sent.`; // prettier-ignore
    const folder = { id: open.folderId ?? '', recordingId: open.recordingId, uploads: open.uploads };
    this.startFolder(folderNameOf(entries.map(({ path }) => path)), frames, leftOut, folder);
    return null;
  }

  pause(key: string): void {
    this.jobs.get(key)?.pause();
  }

  resume(key: string): void {
    this.jobs.get(key)?.resume();
  }

  /** Tries a failed row once more, or goes on with all that the lost link held up. */
  resumeLost(): void {
    for (const { key, state, message } of this.items) {
      if (state === 'paused' && message !== null) this.resume(key);
    }
  }

  /** Gives an upload up and drops its row. */
  async end(key: string): Promise<void> {
    await this.jobs.get(key)?.end();
    this.remove(key);
  }

  /** Drops the row of what has been received or has failed. */
  remove(key: string): void {
    this.jobs.delete(key);
    this.waiting = this.waiting.filter((other) => other !== key);
    this.items = this.items.filter((item) => item.key !== key);
    this.publish();
  }

  private async sameUpload(file: File, arriving: readonly ArrivingRecording[]) {
    for (const open of arriving) {
      const { folderId, filename, bytes, recordingId } = open;
      if (folderId || filename !== file.name || bytes !== file.size || this.busy().has(recordingId)) continue;
      const ends = this.memory.get(memoryKey(recordingId));
      if (ends !== null && ends === (await fingerprintOf(file)).ends) return open;
    }
    return null;
  }

  private startFile(file: File, uploadId?: string, recordingId: string | null = null): void {
    const item = { ...newItem(this.newKey(), file.name, 'file', file.size), recordingId };
    const options = { runId: this.runId, file, memory: this.memory, uploadId };
    this.start(item, (tell) => new FileJob(item, tell, options));
  }

  private startFolder(
    name: string,
    frames: readonly FolderEntry<File>[],
    leftOut: number,
    earlier: { id: string; recordingId: string; uploads: ArrivingRecording['uploads'] } | null,
  ): void {
    const bytes = frames.reduce((sum, { file }) => sum + file.size, 0);
    const item: UploadItem = {
      ...newItem(this.newKey(), name, 'folder', bytes),
      files: frames.length,
      leftOut,
      recordingId: earlier?.recordingId ?? null,
    };
    const options = {
      runId: this.runId,
      frames,
      memory: this.memory,
      earlier: earlier ? { ...earlier, folderId: earlier.id } : undefined,
    };
    this.start(item, (tell) => new FolderJob(item, tell, options));
  }

  private newKey(): string {
    this.count += 1;
    return `upload-${this.count}`;
  }

  private start(item: UploadItem, make: (tell: (change: Partial<UploadItem>) => void) => UploadJob): void {
    this.items = [...this.items, item];
    this.jobs.set(
      item.key,
      make((change) => this.change(item.key, change)),
    );
    this.waiting.push(item.key);
    this.publish();
    this.fill();
  }

  private fill(): void {
    while (this.running < PARALLEL_STACKS) {
      const job = this.jobs.get(this.waiting.shift() ?? '');
      if (!job) return;
      this.running += 1;
      void job.run().finally(() => {
        this.running -= 1;
        this.fill();
      });
    }
  }

  private change(key: string, change: Partial<UploadItem>): void {
    this.items = this.items.map((item) => (item.key === key ? { ...item, ...change } : item));
    if (change.state !== undefined) this.publish();
    else this.news ??= setTimeout(() => this.publish(), NEWS_MS);
  }

  private publish(): void {
    clearTimeout(this.news);
    this.news = undefined;
    this.snapshot = this.items;
    for (const listener of this.listeners) listener();
  }
}

/** What waits for its file, without what this page sends. */
export const openUploads = (
  uploads: Parameters<typeof arrivingRecordings>[0],
  items: readonly UploadItem[],
): ArrivingRecording[] =>
  arrivingRecordings(uploads, new Set(items.flatMap(({ recordingId }) => recordingId ?? [])));

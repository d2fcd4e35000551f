import { open, type FileHandle } from 'node:fs/promises';

/** Common limits of open files per process start at 256; this leaves room for everything else. */
const OPEN_FILES_MAX = 64;

interface OpenFile {
  handle: Promise<FileHandle>;
  /** Reads under way; a file in use is never closed. */
  users: number;
}

/** In order of last use, oldest first. */
const openFiles = new Map<string, OpenFile>();

async function closeFile(path: string, file: OpenFile): Promise<void> {
  openFiles.delete(path);
  await file.handle.then(
    (handle) => handle.close(),
    () => undefined,
  );
}

async function closeOldest(): Promise<void> {
  for (const [path, file] of openFiles) {
    if (openFiles.size <= OPEN_FILES_MAX) return;
    if (file.users === 0) await closeFile(path, file);
  }
}

/** Fills `into` from byte `offset` of the file. @returns bytes got: fewer only at the end of the file. */
export async function readFromFile(path: string, into: Buffer, offset: number): Promise<number> {
  const file = openFiles.get(path) ?? { handle: open(path, 'r'), users: 0 };
  openFiles.delete(path);
  openFiles.set(path, file);
  file.users++;
  try {
    const handle = await file.handle;
    let got = 0;
    while (got < into.length) {
      const { bytesRead } = await handle.read(into, got, into.length - got, offset + got);
      if (bytesRead === 0) break;
      got += bytesRead;
    }
    return got;
  } catch (cause) {
    if (openFiles.get(path) === file) openFiles.delete(path);
    throw cause;
  } finally {
    file.users--;
    await closeOldest();
  }
}

/** Closes the file if it is open and nobody reads it just now. */
export async function releaseFile(path: string): Promise<void> {
  const file = openFiles.get(path);
  if (file && file.users === 0) await closeFile(path, file);
}

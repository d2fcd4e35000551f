import type { FolderEntry } from '@/lib/uploads/folder-files';

/** What a person dropped or chose: single files, and folders with all that is in them. */
export interface Dropped {
  files: File[];
  folders: FolderEntry<File>[][];
}

/** Reads a drop. Entries must be taken at once: the browser empties the list when the event ends. */
export async function readDrop(transfer: DataTransfer): Promise<Dropped> {
  const entries = [...transfer.items].map((item) => item.webkitGetAsEntry?.() ?? null);
  const plain = [...transfer.files];
  const dropped: Dropped = { files: [], folders: [] };
  for (const [index, entry] of entries.entries()) {
    if (entry?.isDirectory) dropped.folders.push(await readFolder(entry as FileSystemDirectoryEntry));
    else if (plain[index]) dropped.files.push(plain[index]);
  }
  return framesTogether(dropped);
}

/** Reads a file input; one that takes folders gives the paths below them. */
export function readInput(list: FileList): Dropped {
  const files = [...list];
  if (files.every((file) => file.webkitRelativePath === '')) return framesTogether({ files, folders: [] });
  return { files: [], folders: [files.map((file) => ({ path: file.webkitRelativePath, file }))] };
}

/** A PNG file is one frame and never a stack: several chosen together are the frames of one recording. */
export function framesTogether({ files, folders }: Dropped): Dropped {
  const frames = files.filter((file) => /\.png$/i.test(file.name));
  if (frames.length < 2) return { files, folders };
  return {
    files: files.filter((file) => !frames.includes(file)),
    folders: [...folders, frames.map((file) => ({ path: file.name, file }))],
  };
}

async function readFolder(folder: FileSystemDirectoryEntry): Promise<FolderEntry<File>[]> {
  const found: FolderEntry<File>[] = [];
  const reader = folder.createReader();
  for (;;) {
    // A reader hands out about a hundred entries at a time, and none at the end.
    const some = await new Promise<FileSystemEntry[]>((resolve, reject) =>
      reader.readEntries(resolve, reject),
    );
    if (some.length === 0) return found;
    for (const entry of some) {
      if (entry.isDirectory) {
        found.push(...(await readFolder(entry as FileSystemDirectoryEntry)));
      } else {
        const file = await new Promise<File>((resolve, reject) =>
          (entry as FileSystemFileEntry).file(resolve, reject),
        );
        found.push({ path: entry.fullPath.replace(/^\//, ''), file });
      }
    }
  }
}

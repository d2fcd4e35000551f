/** What this browser remembers of an upload that it began, by the upload's recording and file. */
export interface UploadMemory {
  get(key: string): string | null;
  set(key: string, ends: string): void;
  forget(key: string): void;
}

interface Storage {
  getItem(key: string): string | null;
  setItem(key: string, value: string): void;
  removeItem(key: string): void;
}

const PREFIX = 'beadline-upload ';

/** Fingerprints kept in the browser's store; a browser that keeps nothing is no obstacle. */
export function uploadMemory(storage: () => Storage): UploadMemory {
  const quietly = <T>(run: (store: Storage) => T): T | null => {
    try {
      return run(storage());
    } catch {
      // Private windows and full stores refuse; the file is then known by name and length alone.
      return null;
    }
  };
  return {
    get: (key) => quietly((store) => store.getItem(PREFIX + key)),
    set: (key, ends) => void quietly((store) => store.setItem(PREFIX + key, ends)),
    forget: (key) => void quietly((store) => store.removeItem(PREFIX + key)),
  };
}

import type { HashAnswer } from './hash-worker';

/**
 * SHA-256 of a whole file, read in slices by a thread of its own, so that the page stays quick.
 * @throws when the file can't be read any more, or with the signal's reason.
 */
export function hashFile(
  file: File,
  signal: AbortSignal,
  onProgress: (bytes: number) => void,
): Promise<string> {
  return new Promise((resolve, reject) => {
    const worker = new Worker(new URL('./hash-worker.ts', import.meta.url), { type: 'module' });
    const end = (settle: () => void) => {
      worker.terminate();
      signal.removeEventListener('abort', stop);
      settle();
    };
    const stop = () => end(() => reject(signal.reason));
    signal.addEventListener('abort', stop);
    worker.onmessage = ({ data }: MessageEvent<HashAnswer>) => {
      if (data.kind === 'progress') onProgress(data.bytes);
      else if (data.kind === 'digest') end(() => resolve(data.sha256));
      else end(() => reject(new Error(data.message)));
    };
    worker.onerror = () => end(() => reject(new Error('The checksum could not be computed.')));
    worker.postMessage(file);
  });
}

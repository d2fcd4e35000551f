import { Sha256 } from '@/lib/sha256';

/** Asked: a file. Answered: how far it is, then its digest, or why it could not be read. */
export type HashAnswer =
  | { kind: 'progress'; bytes: number }
  | { kind: 'digest'; sha256: string }
  | { kind: 'failed'; message: string };

const SLICE_BYTES = 4 * 1024 * 1024;

const answer = (message: HashAnswer) => (self as unknown as { postMessage(m: HashAnswer): void }).postMessage(message); // prettier-ignore

self.onmessage = async ({ data: file }: MessageEvent<File>) => {
  try {
    const hash = new Sha256();
    for (let at = 0; at < file.size; at += SLICE_BYTES) {
      hash.update(new Uint8Array(await file.slice(at, at + SLICE_BYTES).arrayBuffer()));
      answer({ kind: 'progress', bytes: Math.min(file.size, at + SLICE_BYTES) });
    }
    answer({ kind: 'digest', sha256: hash.hex() });
  } catch (error) {
    answer({ kind: 'failed', message: error instanceof Error ? error.message : String(error) });
  }
};

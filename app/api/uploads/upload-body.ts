import { createHash, type Hash } from 'node:crypto';
import type { Checksum } from './checksum';
import type { Holder } from './upload-locks';

/** A request whose sender says nothing for this long is ended; what has arrived stays, ms. */
const SILENT_MS = 60_000;

export interface WatchedBody {
  stream: ReadableStream<Uint8Array>;
  /** Whether the body came to its end. */
  isWhole: () => boolean;
  /** Digest of what went through; null without a checksum. */
  digest: () => Buffer | null;
}

/** Passes a request's body on, notes its life signs, hashes it, and lets it be cut. */
export function watchBody(
  body: ReadableStream<Uint8Array> | null,
  checksum: Checksum | null,
  holder: Holder,
): WatchedBody {
  const hash: Hash | null = checksum ? createHash(checksum.algorithm) : null;
  let whole = body === null;
  let watch: NodeJS.Timeout | undefined;
  const transform = new TransformStream<Uint8Array, Uint8Array>({
    start(controller) {
      holder.cut = () => controller.error(new Error('The sender was cut off.'));
      watch = setInterval(() => {
        if (Date.now() - holder.lastByteAtMs > SILENT_MS) holder.cut();
      }, SILENT_MS / 6);
      watch.unref();
    },
    transform(piece, controller) {
      holder.lastByteAtMs = Date.now();
      hash?.update(piece);
      controller.enqueue(piece);
    },
    flush() {
      whole = true;
      clearInterval(watch);
    },
  });
  const source = body ?? new ReadableStream<Uint8Array>({ start: (controller) => controller.close() });
  source
    .pipeTo(transform.writable)
    .catch(() => undefined)
    .finally(() => clearInterval(watch));
  return { stream: transform.readable, isWhole: () => whole, digest: () => hash?.digest() ?? null };
}

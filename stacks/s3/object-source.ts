import { assertInside, type ByteSource, OutOfRangeError, type ReadRoom, roomFor } from '../byte-source';
import { setTimeout as pause } from 'node:timers/promises';

const TRIES = 4;
const AGAIN_MS = 200;

/**
 * An object read by ranges over HTTP, by an address that needs no password. An object that is another one by now is
 * refused: each answer must carry the tag of the first.
 * @param sizeBytes what the object must have; taken from the first answer when left out
 */
export function objectSource(url: string, sizeBytes: number): ByteSource {
  let tag: string | null = null;
  const source = {
    sizeBytes,
    async read(offset: number, length: number, room?: ReadRoom) {
      assertInside(source, offset, length);
      const bytes = roomFor(length, room);
      if (length === 0) return bytes;
      const answer = await rangeOf(url, offset, length, tag);
      tag ??= answer.headers.get('etag');
      const total = Number(/\/(\d+)$/.exec(answer.headers.get('content-range') ?? '')?.[1] ?? NaN);
      if (total !== sizeBytes) throw new RangeError(`The file had ${sizeBytes} bytes, now it has ${total}.`);
      let got = 0;
      for await (const piece of answer.body as unknown as AsyncIterable<Uint8Array>) {
        if (got + piece.length > length) throw new OutOfRangeError(offset, got + piece.length, sizeBytes);
        bytes.set(piece, got);
        got += piece.length;
      }
      if (got < length) throw new OutOfRangeError(offset, length, offset + got);
      return length === bytes.length ? bytes : bytes.subarray(0, length);
    },
    async close() {},
  };
  return source;
}

/** Size of the object at an address. */
export async function objectSize(url: string): Promise<number> {
  const answer = await rangeOf(url, 0, 1, null);
  await answer.arrayBuffer();
  return Number(/\/(\d+)$/.exec(answer.headers.get('content-range') ?? '')?.[1] ?? NaN);
}

/** @throws RangeError for an object that has changed; an error with code ENOENT for one that is gone */
async function rangeOf(url: string, offset: number, length: number, tag: string | null): Promise<Response> {
  const headers: Record<string, string> = { range: `bytes=${offset}-${offset + length - 1}` };
  if (tag) headers['if-match'] = tag;
  for (let tried = 1; ; tried++) {
    const answer = await fetch(url, { headers }).catch((cause: unknown) => {
      if (tried === TRIES) throw cause;
      return null;
    });
    if (answer?.status === 206) return answer;
    if (answer) {
      await answer.arrayBuffer().catch(() => undefined);
      if (answer.status === 412) throw new RangeError('The stored object has changed since it was opened.');
      if (answer.status === 404)
        throw Object.assign(new Error('The stored object is not there.'), { code: 'ENOENT' });
      if (answer.status < 500 || tried === TRIES) {
        throw new Error(`The object store answered ${answer.status} to a range.`);
      }
    }
    await pause(AGAIN_MS * 2 ** (tried - 1));
  }
}

import { createReadStream } from 'node:fs';
import { stat } from 'node:fs/promises';
import { Readable } from 'node:stream';
import { LabError } from '@/lib/errors';
import { attachment } from './content-disposition';

interface SentFile {
  name: string;
  type: string;
  /** Strong entity tag: the same for the same bytes only. */
  tag: string;
  requestId: string;
}

/**
 * A stored file as a download that can go on where it broke off: one range of bytes at a time (RFC 9110, sections 14
 * and 13.1.5). Ranges of any other kind get the whole file.
 */
export async function sendFile(request: Request, path: string, file: SentFile): Promise<Response> {
  const found = await stat(path).catch(() => null);
  return sendBytes(request, found?.size ?? null, file, async (start, end) => {
    const stream = createReadStream(path, { start, end, highWaterMark: 1 << 18 });
    return Readable.toWeb(stream) as ReadableStream<Uint8Array>;
  });
}

/**
 * The same for bytes that lie anywhere.
 * @param size null where they are no longer stored
 * @param read bytes from the first to the last that is named
 */
export async function sendBytes(
  request: Request,
  size: number | null,
  file: SentFile,
  read: (from: number, to: number) => Promise<ReadableStream<Uint8Array>>,
): Promise<Response> {
  if (size === null) throw new LabError('GONE', 'The file is no longer stored.');
  const etag = `"${file.tag}"`;
  const ifRange = request.headers.get('if-range');
  const range = ifRange === null || ifRange === etag ? rangeOf(request.headers.get('range'), size) : null;
  const headers: Record<string, string> = {
    'Content-Type': file.type,
    'Content-Disposition': attachment(file.name),
    'Cache-Control': 'private, no-store',
    'Accept-Ranges': 'bytes',
    ETag: etag,
    'X-Request-Id': file.requestId,
  };
  if (range === 'beyond') {
    return new Response(null, { status: 416, headers: { ...headers, 'Content-Range': `bytes */${size}` } });
  }
  const [from, to] = range ?? [0, size - 1];
  headers['Content-Length'] = String(to - from + 1);
  if (range) headers['Content-Range'] = `bytes ${from}-${to}/${size}`;
  return new Response(await read(from, to), { status: range ? 206 : 200, headers });
}

/** First and last byte of a single range; null for none, or several. */
function rangeOf(header: string | null, size: number): [number, number] | 'beyond' | null {
  const match = /^bytes=(\d*)-(\d*)$/.exec(header?.trim() ?? '');
  if (!match || (match[1] === '' && match[2] === '')) return null;
  const [first, last] = [match[1], match[2]].map((text) => (text === '' ? null : Number(text)));
  const from = first ?? Math.max(0, size - last!);
  const to = first === null ? size - 1 : Math.min(last ?? size - 1, size - 1);
  if (first !== null && last !== null && last < first) return null;
  return from >= size || to < from ? 'beyond' : [from, to];
}

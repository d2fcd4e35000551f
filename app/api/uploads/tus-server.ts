import { FileStore } from '@tus/file-store';
import { Server } from '@tus/server';
import { limit } from '@/lib/env';
import { uploadsFolder } from '@/models/queries/received-bytes';
import { TUS_VERSION, UPLOADS_PATH } from './tus-headers';

/** Name of the header by which we tell the store the id that stands in our row. */
const ID_HEADER = 'x-beadline-upload';

const shared = globalThis as unknown as { beadlineTus?: { folder: string; server: Server } };

/** Locks are ours (upload-locks): the server's own would not reach across processes. */
const noLock = { newLock: () => ({ lock: async () => undefined, unlock: async () => undefined }) };

function tusServer(): Server {
  const folder = uploadsFolder();
  if (shared.beadlineTus?.folder !== folder) {
    const server = new Server({
      path: UPLOADS_PATH,
      datastore: new FileStore({ directory: folder }),
      relativeLocation: true,
      maxSize: limit('uploadBytes'),
      locker: noLock,
      namingFunction: (request) => request.headers.get(ID_HEADER) ?? '',
    });
    shared.beadlineTus = { folder, server };
  }
  return shared.beadlineTus.server;
}

/** Headers that the store looks at; everything else of a request stays outside. */
const PASSED = [
  'content-length',
  'content-type',
  'upload-length',
  'upload-offset',
  'upload-metadata',
  'host',
];

/** Hands a request that has been checked to the tus server. */
export function passToTus(
  request: Request,
  {
    method,
    id,
    body,
  }: { method: 'POST' | 'PATCH' | 'DELETE'; id: string; body: ReadableStream<Uint8Array> | null },
): Promise<Response> {
  const headers = new Headers({ 'Tus-Resumable': TUS_VERSION, [ID_HEADER]: id });
  for (const name of PASSED) {
    const value = request.headers.get(name);
    if (value !== null) headers.set(name, value);
  }
  const url = new URL(method === 'POST' ? UPLOADS_PATH : `${UPLOADS_PATH}/${id}`, request.url);
  const init: RequestInit & { duplex: 'half' } = { method, headers, body, duplex: 'half' };
  return tusServer().handleWeb(new Request(url, init));
}

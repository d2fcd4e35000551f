import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { newId } from '@/lib/ids';
import { breakUpload } from '../helpers/api-client';
import { sharedServer } from '../helpers/server';
import { closeTusClient, FILE, PIECE_TYPE, TusClient, UPLOADS } from '../helpers/tus-client';
import { until } from '../helpers/until';

// Titles quote tus 1.0.0 (tus.io/protocols/resumable-upload, "Core Protocol"), each MUST of the
// server's side; the SHOULDs that we keep stand at the end.

const { baseUrl, databaseUrl } = sharedServer();
let client: TusClient;
beforeAll(async () => {
  client = await TusClient.inNewLab(baseUrl, databaseUrl);
});
afterAll(closeTusClient);

describe('headers', () => {
  let url: string;
  beforeEach(async () => {
    ({ url } = await client.begin());
  });

  it.each(['-1', '1.5', '0x10', 'abc', '', ' '])(
    'Upload-Offset: "The value MUST be a non-negative integer." Not %j',
    async (bad) => {
      const response = await client.patch(url, bad, FILE.subarray(0, 10));
      expect([response.status, await client.offset(url)]).toEqual([400, 0]);
    },
  );

  it.each(['-1', '1.5', '1e3', 'abc', ''])(
    'Upload-Length: "The value MUST be a non-negative integer." Not %j',
    async (bad) => {
      const before = await client.unfinished();
      expect((await client.post({ 'Upload-Length': bad })).status).toBe(400);
      expect(await client.unfinished()).toBe(before);
    },
  );

  it('Upload-Length: 0 is one: the upload is complete at once', async () => {
    const { url: empty, recordingId } = await client.begin(0);
    expect((await client.head(empty)).headers.get('upload-offset')).toBe('0');
    await until(
      () => client.state(recordingId),
      (state) => state === 'refused',
      { withinMs: 30_000 },
    );
  });

  it('"The Tus-Version response header MUST be a comma-separated list of protocol versions supported by the Server [...] sorted by Server\'s preference"', async () => {
    const response = await client.send('OPTIONS', UPLOADS);
    expect(response.headers.get('tus-version')).toMatch(/^1\.0\.0(,\d+\.\d+\.\d+)*$/);
  });

  it.each([
    ['201', 201, () => client.post()],
    ['200', 200, () => client.head(url)],
    ['204', 204, () => client.patch(url, 0, FILE.subarray(0, 10))],
    ['400', 400, () => client.patch(url, 'x', FILE.subarray(0, 10))],
    ['404', 404, () => client.head(`${UPLOADS}/${newId()}`)],
    ['405', 405, () => client.send('GET', url)],
    ['409', 409, () => client.patch(url, 7, FILE.subarray(0, 10))],
    ['412', 412, () => client.send('HEAD', url, {}, { version: {} })],
    ['413', 413, () => client.post({ 'Upload-Length': '9999999999999999' })],
    ['415', 415, () => client.patch(url, 0, FILE, { 'Content-Type': 'image/tiff' })],
  ])(
    '"The Tus-Resumable header MUST be included in every request and response [...] The value MUST be the version of the protocol": a %s',
    async (_, status, ask) => {
      const response = await ask();
      expect([response.status, response.headers.get('tus-resumable')]).toEqual([status, '1.0.0']);
    },
  );

  it('an answer to somebody who is not signed in carries Tus-Resumable too', async () => {
    const response = await fetch(`${baseUrl}${url}`, {
      method: 'HEAD',
      headers: { 'Tus-Resumable': '1.0.0' },
    });
    expect([response.status, response.headers.get('tus-resumable')]).toEqual([401, '1.0.0']);
  });

  const VERSIONS = [
    {},
    { 'Tus-Resumable': '0.2.2' },
    { 'Tus-Resumable': '1.0' },
    { 'Tus-Resumable': '2.0.0' },
  ];
  it.each(VERSIONS)(
    '"If the version specified by the Client is not supported by the Server, it MUST respond with the 412 Precondition Failed status and MUST include the Tus-Version header": %j',
    async (version) => {
      for (const [method, path] of [
        ['POST', UPLOADS],
        ['HEAD', url],
        ['PATCH', url],
        ['DELETE', url],
      ]) {
        // prettier-ignore
        const response = await client.send(method!, path!, {}, { version: version as Record<string, string> });
        expect([method, response.status, response.headers.get('tus-version')]).toEqual([
          method,
          412,
          '1.0.0',
        ]);
      }
    },
  );

  it.each(VERSIONS)('"In addition, the Server MUST NOT process the request.": %j', async (version) => {
    const other = { version: version as Record<string, string> };
    const before = await client.unfinished();
    await client.post({}, other);
    const piece = { ...PIECE_TYPE, 'Upload-Offset': '0' };
    await client.send('PATCH', url, piece, { ...other, body: FILE.subarray(0, 10) });
    await client.send('DELETE', url, {}, other);
    expect([await client.unfinished(), await client.offset(url)]).toEqual([before, 0]);
  });

  it('"The Tus-Extension response header MUST be a comma-separated list of the extensions supported by the Server."', async () => {
    const response = await client.send('OPTIONS', UPLOADS);
    const names = response.headers.get('tus-extension')!.split(',');
    expect(names.sort()).toEqual([
      'checksum',
      'creation',
      'creation-with-upload',
      'expiration',
      'termination',
    ]);
  });

  it('"The Tus-Max-Size response header MUST be a non-negative integer indicating the maximum allowed size of an entire upload in bytes."', async () => {
    const response = await client.send('OPTIONS', UPLOADS);
    expect(response.headers.get('tus-max-size')).toBe('50000000000');
  });

  it.each(['POST', 'PUT', 'DELETE'])(
    '"The X-HTTP-Method-Override request header [...] MUST be interpreted as the request\'s method by the Server [...] The actual method of the request MUST be ignored.": %s meaning PATCH, HEAD, DELETE',
    async (actual) => {
      const as = (method: string, more: Record<string, string> = {}, body?: Uint8Array) =>
        client.send(actual, url, { 'X-HTTP-Method-Override': method, ...more }, { body });
      const patched = await as('PATCH', { ...PIECE_TYPE, 'Upload-Offset': '0' }, FILE.subarray(0, 50));
      expect([patched.status, patched.headers.get('upload-offset')]).toEqual([204, '50']);
      expect((await as('HEAD')).headers.get('upload-offset')).toBe('50');
      expect((await as('OPTIONS')).headers.get('tus-version')).toBe('1.0.0');
      expect((await as('GET')).status).toBe(405);
      expect((await as('DELETE')).status).toBe(204);
      expect((await client.head(url)).status).toBe(404);
    },
  );
});

describe('HEAD', () => {
  it('"The Server MUST always include the Upload-Offset header in the response for a HEAD request, even if the offset is 0, or the upload is already considered completed."', async () => {
    const { url } = await client.begin();
    expect((await client.head(url)).headers.get('upload-offset')).toBe('0');
    await client.patch(url, 0, FILE.subarray(0, 300));
    expect((await client.head(url)).headers.get('upload-offset')).toBe('300');
    await client.patch(url, 300, FILE.subarray(300));
    expect((await client.head(url)).headers.get('upload-offset')).toBe(String(FILE.length));
  });

  it('"If the size of the upload is known, the Server MUST include the Upload-Length header in the response."', async () => {
    const { url } = await client.begin(1234);
    expect((await client.head(url)).headers.get('upload-length')).toBe('1234');
  });

  it('"The Server MUST prevent the client and/or proxies from caching the response by adding the Cache-Control: no-store header"', async () => {
    const { url } = await client.begin();
    expect((await client.head(url)).headers.get('cache-control')).toBe('no-store');
  });
});

describe('PATCH', () => {
  let url: string;
  beforeEach(async () => {
    ({ url } = await client.begin());
  });

  it.each(['image/tiff', 'application/octet-stream', 'application/json', 'text/plain'])(
    '"All PATCH requests MUST use Content-Type: application/offset+octet-stream, otherwise the server SHOULD return a 415 Unsupported Media Type status.": not %s',
    async (type) => {
      const response = await client.patch(url, 0, FILE.subarray(0, 10), { 'Content-Type': type });
      expect([response.status, await client.offset(url)]).toEqual([415, 0]);
    },
  );

  it.each([0, 299, 301, 19_999, 20_000, 999_999_999_999])(
    '"The Upload-Offset header\'s value MUST be equal to the current offset of the resource. [...] If the offsets do not match, the Server MUST respond with the 409 Conflict status without modifying the upload resource.": %d where 300 is right',
    async (wrong) => {
      await client.patch(url, 0, FILE.subarray(0, 300));
      const response = await client.patch(url, wrong, FILE.subarray(0, 10));
      expect([response.status, await client.offset(url)]).toEqual([409, 300]);
      expect((await client.patch(url, 300, FILE.subarray(300))).status).toBe(204);
    },
  );

  it('"The Server MUST acknowledge successful PATCH requests with the 204 No Content status. It MUST include the Upload-Offset header containing the new offset. The new offset MUST be the sum of the offset before the PATCH request and the number of bytes received and processed or stored"', async () => {
    let offset = 0;
    for (const length of [1, 7, 0, 4096, 15_896]) {
      const response = await client.patch(url, offset, FILE.subarray(offset, offset + length));
      offset += length;
      expect([response.status, response.headers.get('upload-offset')]).toEqual([204, String(offset)]);
      expect(await response.text()).toBe('');
    }
    expect(offset).toBe(FILE.length);
  });
});

describe('OPTIONS', () => {
  it.each([{}, { 'Tus-Resumable': '0.2.2' }, { 'Tus-Resumable': 'none' }])(
    '"A successful response indicated by the 204 No Content or 200 OK status MUST contain the Tus-Version header [...] The Client SHOULD NOT include the Tus-Resumable header in the request and the Server MUST ignore the header.": %j',
    async (version) => {
      const response = await client.send(
        'OPTIONS',
        UPLOADS,
        {},
        { version: version as Record<string, string> },
      );
      expect([response.status, response.headers.get('tus-version')]).toEqual([204, '1.0.0']);
    },
  );
});

describe('what SHOULD be, and is', () => {
  it.each(['HEAD', 'PATCH', 'DELETE'])(
    '"If the resource is not found, the Server SHOULD return either the 404 [...] without the Upload-Offset header.": %s',
    async (method) => {
      const headers = { ...PIECE_TYPE, 'Upload-Offset': '0' };
      const response = await client.send(method, `${UPLOADS}/${newId()}`, headers);
      expect([response.status, response.headers.get('upload-offset')]).toEqual([404, null]);
    },
  );

  it('"The Server SHOULD always attempt to store as much of the received data as possible.": a link that breaks', async () => {
    const { url, recordingId } = await client.begin();
    // A server that had not begun to read when the link broke has received nothing: a busy one gets longer.
    let stored = 0;
    for (const pauseMs of [300, 1_000, 3_000, 9_000]) {
      await breakUpload(client.script, url, 0, FILE, 12_000, pauseMs);
      stored = await until(
        () => client.offset(url),
        (offset) => offset > 0,
        { withinMs: 3_000 },
      ).catch(() => 0);
      if (stored > 0) break;
    }
    expect(stored).toBe(12_000);
    const rest = await until(
      () => client.patch(url, 12_000, FILE.subarray(12_000)),
      ({ status }) => status === 204,
      { withinMs: 10_000 },
    );
    expect(rest.headers.get('upload-offset')).toBe(String(FILE.length));
    expect(await client.state(recordingId)).not.toBe('arriving');
  });

  it('what was sent is handed out by no method', async () => {
    const { url } = await client.begin();
    await client.patch(url, 0, FILE);
    const response = await client.send('GET', url);
    expect([response.status, response.headers.get('allow')]).toEqual([405, 'HEAD, PATCH, DELETE']);
  });
});

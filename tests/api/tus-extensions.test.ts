import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { models } from '@/models';
import { sharedServer } from '../helpers/server';
import { checksumOf, closeTusClient, FILE, PIECE_TYPE, TusClient, UPLOADS } from '../helpers/tus-client';

// Titles quote tus 1.0.0 (tus.io/protocols/resumable-upload, "Protocol Extensions"): each MUST of the
// server's side of the extensions that are offered. Concatenation and lengths that come later are not.

const { baseUrl, databaseUrl } = sharedServer();
let client: TusClient;
beforeAll(async () => {
  client = await TusClient.inNewLab(baseUrl, databaseUrl);
});
afterAll(closeTusClient);

const offered = async () => (await client.send('OPTIONS', UPLOADS)).headers.get('tus-extension')!.split(',');
const base64 = (text: string) => Buffer.from(text).toString('base64');

describe('creation', () => {
  it('"If the Server supports this extension, it MUST add creation to the Tus-Extension header."', async () => {
    expect(await offered()).toContain('creation');
  });

  it('"The Server MUST acknowledge a successful upload creation with the 201 Created status. The Server MUST set the Location header to the URL of the created resource."', async () => {
    const response = await client.post();
    expect(response.status).toBe(201);
    expect(new URL(response.headers.get('location')!, baseUrl).pathname).toMatch(
      /^\/api\/v1\/uploads\/[0-9a-f-]{36}$/,
    );
    expect((await client.head(response.headers.get('location')!)).status).toBe(200);
  });

  it('"The Client MUST perform the actual upload using the core protocol.": all bytes by PATCH make the recording', async () => {
    const { url, recordingId } = await client.begin();
    expect(await client.state(recordingId)).toBe('arriving');
    await client.patch(url, 0, FILE);
    expect(await client.state(recordingId)).not.toBe('arriving');
  });

  it.each([
    ['neither', { 'Upload-Length': '' }],
    ['both', { 'Upload-Defer-Length': '1' }],
  ])('"The request MUST include one of the following headers": %s answers 400', async (_, headers) => {
    expect((await client.post(headers as Record<string, string>)).status).toBe(400);
  });

  it.each(['1', '0', 'yes'])(
    '"If the Server supports deferring length, it MUST add creation-defer-length": it does not, and Upload-Defer-Length: %s answers 400',
    async (value) => {
      expect(await offered()).not.toContain('creation-defer-length');
      const headers = { 'Upload-Metadata': client.metadata(), 'Upload-Defer-Length': value };
      expect((await client.send('POST', UPLOADS, headers)).status).toBe(400);
    },
  );

  it('"If the length of an upload is not deferred, this header MUST be omitted."', async () => {
    const { url } = await client.begin();
    expect((await client.head(url)).headers.get('upload-defer-length')).toBeNull();
  });

  it('"If the length of the upload exceeds the maximum [...] the Server MUST respond with the 413 Request Entity Too Large status."', async () => {
    const most = Number((await client.send('OPTIONS', UPLOADS)).headers.get('tus-max-size'));
    expect((await client.post({ 'Upload-Length': String(most + 1) })).status).toBe(413);
    expect((await client.post({ 'Upload-Length': '9'.repeat(400) })).status).toBe(413);
  });

  it('"responses to HEAD requests MUST include the Upload-Metadata header and its value as specified by the Client during the creation."', async () => {
    const sent = `${client.metadata()},2 ${base64('two')},1,note ${base64('µ')},empty`;
    const { headers } = await client.post({ 'Upload-Metadata': sent });
    const url = headers.get('location')!;
    expect((await client.head(url)).headers.get('upload-metadata')).toBe(sent);
    await client.patch(url, 0, FILE);
    expect((await client.head(url)).headers.get('upload-metadata')).toBe(sent);
  });

  it.each([
    ['"The key and value MUST be separated by a space."', 'note\tYQ=='],
    ['"The key and value MUST be separated by a space.": one', 'note YQ== YQ=='],
    ['"The key MUST NOT contain spaces"', `my note ${base64('a')}`],
    ['"The key [...] MUST NOT be empty."', ` ${base64('a')}`],
    ['"MUST consist of one or more comma-separated key-value pairs": none between commas', `a YQ==,,b YQ==`],
    ['"the value MUST be Base64 encoded."', 'note !!!!'],
    ['"the value MUST be Base64 encoded.": whole', 'note YQ'],
    ['"All keys MUST be unique."', `note YQ==,note Yg==`],
    [
      '"Servers SHOULD carefully validate metadata values [...] to avoid header smuggling."',
      `note ${base64('a\r\nX: y')}`,
    ],
  ])('Upload-Metadata: %s', async (_, bad) => {
    const before = await client.unfinished();
    const response = await client.post({ 'Upload-Metadata': `${client.metadata()},${bad}` });
    expect([response.status, await client.unfinished()]).toEqual([400, before]);
  });

  it.each(['note', 'note '])('Upload-Metadata: "The value MAY be empty.": %j', async (empty) => {
    expect((await client.post({ 'Upload-Metadata': `${client.metadata()},${empty}` })).status).toBe(201);
  });
});

describe('creation with upload', () => {
  it('"MUST advertise this by including creation-with-upload in the Tus-Extension header. [...] if the Server does not offer the Creation extension, it MUST NOT offer the Creation With Upload extension"', async () => {
    expect(await offered()).toEqual(expect.arrayContaining(['creation', 'creation-with-upload']));
  });

  it.each([0, 1, 5000, FILE.length])(
    '"MUST include the Upload-Offset header in the response and MUST set its value to the offset of the upload after applying the accepted bytes.": %d bytes',
    async (count) => {
      const response = await client.post(PIECE_TYPE, { body: FILE.subarray(0, count) });
      expect([response.status, response.headers.get('upload-offset')]).toEqual([201, String(count)]);
      expect(await client.offset(response.headers.get('location')!)).toBe(count);
    },
  );

  it('"The Client MUST include the Content-Type: application/offset+octet-stream header.": bytes of another type begin nothing', async () => {
    const before = await client.unfinished();
    const response = await client.post({ 'Content-Type': 'image/tiff' }, { body: FILE.subarray(0, 10) });
    expect([response.status, await client.unfinished()]).toEqual([415, before]);
  });

  it.each([
    ['a checksum that differs', 460, checksumOf('sha1', FILE)],
    ['an algorithm that is not known', 400, 'md5 abcd'],
  ])(
    '"similar rules as for the PATCH request and response apply": %s leaves nothing behind',
    async (_, status, sum) => {
      const before = await client.unfinished();
      const response = await client.post(
        { ...PIECE_TYPE, 'Upload-Checksum': sum },
        { body: FILE.subarray(0, 10) },
      );
      expect([response.status, await client.unfinished()]).toEqual([status, before]);
    },
  );

  it('more bytes than announced begin nothing', async () => {
    const before = await client.unfinished();
    const response = await client.post(
      { ...PIECE_TYPE, 'Upload-Length': '9' },
      { body: FILE.subarray(0, 10) },
    );
    expect([response.status, await client.unfinished()]).toEqual([413, before]);
  });
});

describe('expiration', () => {
  // RFC 9110, section 5.6.7, which took the place of RFC 7231: IMF-fixdate.
  const DATE = /^(Mon|Tue|Wed|Thu|Fri|Sat|Sun), \d\d [A-Z][a-z]{2} \d{4} \d\d:\d\d:\d\d GMT$/;

  it('"the Server MUST add expiration to the Tus-Extension header."', async () => {
    expect(await offered()).toContain('expiration');
  });

  it('"If the expiration is known at the creation, the Upload-Expires header MUST be included in the response to the initial POST request. [...] MUST be in RFC 7231 datetime format."', async () => {
    for (const response of [
      await client.post(),
      await client.post(PIECE_TYPE, { body: FILE.subarray(0, 9) }),
    ]) {
      expect(response.headers.get('upload-expires')).toMatch(DATE);
      expect(Date.parse(response.headers.get('upload-expires')!)).toBeGreaterThan(Date.now());
    }
  });

  it('"This header MUST be included in every PATCH response if the upload is going to expire.": in refusals too', async () => {
    const { url } = await client.begin();
    const piece = FILE.subarray(0, 10);
    const responses = [
      await client.patch(url, 0, piece),
      await client.patch(url, 5, piece),
      await client.patch(url, 'x', piece),
      await client.patch(url, 10, piece, { 'Content-Type': 'text/plain' }),
      await client.patch(url, 10, piece, { 'Upload-Checksum': 'md5 abcd' }),
      await client.patch(url, 10, piece, { 'Upload-Checksum': checksumOf('sha1', FILE) }),
      await client.patch(url, 10, FILE),
    ];
    expect(responses.map(({ status }) => status)).toEqual([204, 409, 400, 415, 400, 460, 413]);
    for (const { headers } of responses) expect(headers.get('upload-expires')).toMatch(DATE);
  });

  it('a finished upload is not going to expire, and is not taken when its time would have come', async () => {
    const { url, recordingId } = await client.begin();
    const response = await client.patch(url, 0, FILE);
    expect(response.headers.get('upload-expires')).toBeNull();
    const row = await models().Upload.findByPk(url.split('/').at(-1));
    expect([row?.state, row?.expiresAt]).toEqual(['finished', null]);
    expect(await client.state(recordingId)).not.toBe('arriving');
  });

  it('"If a Client does attempt to resume an upload which has since been removed by the Server, the Server SHOULD respond with the 404 Not Found or 410 Gone status. The latter one SHOULD be used if the Server is keeping track of expired uploads."', async () => {
    const { url } = await client.begin();
    await models().Upload.update(
      { expiresAt: new Date(Date.now() - 1000) },
      { where: { id: url.split('/').at(-1)! } },
    );
    expect((await client.head(url)).status).toBe(410);
    expect((await client.patch(url, 0, FILE)).status).toBe(410);
  });
});

describe('checksum', () => {
  let url: string;
  const piece = FILE.subarray(0, 5000);
  const rest = FILE.subarray(5000);
  beforeEach(async () => {
    ({ url } = await client.begin());
    await client.patch(url, 0, piece);
  });

  it('"If supported, the Server MUST add checksum to the Tus-Extension header."', async () => {
    expect(await offered()).toContain('checksum');
  });

  it('"The Tus-Checksum-Algorithm header MUST be included in the response to an OPTIONS request. [...] MUST be a comma-separated list": "at least the SHA1 checksum algorithm identified by sha1", names "MUST only consist of ASCII characters with the modification that uppercase characters are excluded"', async () => {
    const names = (await client.send('OPTIONS', UPLOADS)).headers.get('tus-checksum-algorithm')!.split(',');
    expect(names).toContain('sha1');
    for (const name of names) expect(name).toMatch(/^[a-z0-9-]+$/);
  });

  it.each(['sha1', 'sha256'])(
    '"the Server MUST verify the uploaded chunk against the provided checksum using the specified algorithm": %s, "204 No Content if the checksums match"',
    async (algorithm) => {
      const right = { 'Upload-Checksum': checksumOf(algorithm, rest) };
      const response = await client.patch(url, 5000, rest, right);
      expect([response.status, response.headers.get('upload-offset')]).toEqual([204, String(FILE.length)]);
    },
  );

  it.each([
    ['sha1', 460, checksumOf('sha1', piece)],
    ['sha256', 460, checksumOf('sha256', piece)],
    ['md5', 400, checksumOf('md5', rest)],
    ['SHA1', 400, `SHA1 ${checksumOf('sha1', rest).slice(5)}`],
  ])(
    '"400 Bad Request if the checksum algorithm is not supported [...] 460 Checksum Mismatch if the checksums mismatch [...] In the first two cases the uploaded chunk MUST be discarded, and the upload and its offset MUST NOT be updated.": %s %d',
    async (_, status, sum) => {
      const response = await client.patch(url, 5000, rest, { 'Upload-Checksum': sum });
      expect([response.status, await client.offset(url)]).toEqual([status, 5000]);
      // Bytes that were dropped must not come back as part of what is sent next.
      const again = await client.patch(url, 5000, rest, { 'Upload-Checksum': checksumOf('sha1', rest) });
      expect(again.headers.get('upload-offset')).toBe(String(FILE.length));
    },
  );

  it.each([
    'sha1',
    'sha1 ',
    'sha1 abc',
    `sha1  ${checksumOf('sha1', rest).slice(5)}`,
    `sha1:${checksumOf('sha1', rest).slice(5)}`,
  ])(
    '"The header MUST consist of the name of the used checksum algorithm and the Base64 encoded checksum separated by a space.": not %j',
    async (sum) => {
      const response = await client.patch(url, 5000, rest, { 'Upload-Checksum': sum });
      expect([response.status, await client.offset(url)]).toEqual([400, 5000]);
    },
  );

  it('"If the Server can handle trailers, this behavior MUST be announced by adding checksum-trailer": it does not', async () => {
    expect(await offered()).not.toContain('checksum-trailer');
  });
});

describe('termination', () => {
  it('"it MUST be announced by adding termination to the Tus-Extension header."', async () => {
    expect(await offered()).toContain('termination');
  });

  it('"When receiving a DELETE request for an existing upload the Server SHOULD free associated resources and MUST respond with the 204 No Content status [...] For all future requests to this URL, the Server SHOULD respond with the 404 Not Found or 410 Gone status."', async () => {
    const { url, recordingId } = await client.begin();
    await client.patch(url, 0, FILE.subarray(0, 100));
    expect((await client.send('DELETE', url)).status).toBe(204);
    expect((await client.head(url)).status).toBe(404);
    expect((await client.patch(url, 100, FILE.subarray(100))).status).toBe(404);
    expect((await client.send('DELETE', url)).status).toBe(404);
    expect((await client.script.request(`/api/v1/recordings/${recordingId}`)).status).toBe(404);
  });

  it('a finished upload has become its recording, which is removed by its own address: 409', async () => {
    const { url, recordingId } = await client.begin();
    await client.patch(url, 0, FILE);
    expect((await client.send('DELETE', url)).status).toBe(409);
    expect((await client.script.request(`/api/v1/recordings/${recordingId}`)).status).toBe(200);
  });
});

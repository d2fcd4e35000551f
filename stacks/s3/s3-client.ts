import { createHash } from 'node:crypto';
import { setTimeout as pause } from 'node:timers/promises';
import { XMLParser } from 'fast-xml-parser';
import { encodePart, sha256Hex, signedHeaders, signedUrl, UNSIGNED, type S3Credentials } from './sign';

/** A bucket that speaks the documented HTTP interface of Amazon S3, addressed by path: ENDPOINT/BUCKET/KEY. */
export interface S3Place extends S3Credentials {
  endpoint: string;
  bucket: string;
  /** Put before each key; empty, or ends with a slash. */
  prefix: string;
}

/** What the store answered when it refused. */
export class S3Error extends Error {
  override name = 'S3Error';
  constructor(
    readonly status: number,
    /** Of the error document, as `NoSuchKey`. */
    readonly code: string,
    what: string,
  ) {
    super(`The object store answered ${status} ${code} to ${what}.`);
  }
}

export interface StoredPart {
  number: number;
  etag: string;
}

const TRIES = 4;
const AGAIN_MS = 300;
const xml = new XMLParser({ parseTagValue: false, isArray: (name) => name === 'Contents' });
const escaped = (text: string) =>
  text.replace(/[&<>"]/g, (sign) => ({ '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;' })[sign]!);

interface Ask {
  query?: Record<string, string>;
  headers?: Record<string, string>;
  body?: Uint8Array;
  signal?: AbortSignal;
}

/** Objects of one bucket. What fails in passing is tried again; every method throws S3Error for a refusal. */
export class S3Client {
  constructor(private readonly place: S3Place) {}

  /** An address by which anybody can read this one object for so many seconds. */
  readableUrl(key: string, seconds: number): string {
    return signedUrl(this.place, this.urlOf(key), seconds, new Date());
  }

  /** @param options ifNoneMatch: refuses with 412 where the object exists */
  async put(key: string, body: Uint8Array, options: { ifNoneMatch?: boolean } = {}): Promise<void> {
    const headers: Record<string, string> = { 'content-type': 'application/octet-stream' };
    if (options.ifNoneMatch) headers['if-none-match'] = '*';
    await drained(await this.ask('PUT', key, { body, headers }));
  }

  /** The whole object or `bytes=from-to` of it, as a stream. */
  async get(key: string, range?: string, signal?: AbortSignal): Promise<Response> {
    return this.ask('GET', key, { headers: range ? { range } : {}, signal });
  }

  /** Size and tag, or null where there is none. */
  async head(key: string): Promise<{ bytes: number; etag: string } | null> {
    try {
      const { headers } = await this.ask('HEAD', key, {});
      return { bytes: Number(headers.get('content-length')), etag: headers.get('etag') ?? '' };
    } catch (cause) {
      if (cause instanceof S3Error && cause.status === 404) return null;
      throw cause;
    }
  }

  /** Removing what is not there is no error. */
  async remove(key: string): Promise<void> {
    await drained(await this.ask('DELETE', key, {}));
  }

  /** Keys that begin with `start`, with their sizes. */
  async list(start: string): Promise<{ key: string; bytes: number }[]> {
    const found: { key: string; bytes: number }[] = [];
    for (let token: string | undefined; ;) {
      const query: Record<string, string> = { 'list-type': '2', prefix: this.place.prefix + start };
      if (token) query['continuation-token'] = token;
      const page = (xml.parse(await (await this.ask('GET', null, { query })).text()) as ListDocument)
        .ListBucketResult;
      for (const { Key, Size } of page.Contents ?? []) {
        found.push({ key: String(Key).slice(this.place.prefix.length), bytes: Number(Size) });
      }
      if (page.IsTruncated !== 'true') return found;
      token = page.NextContinuationToken;
    }
  }

  /** Begins an object that is sent in parts. @returns its upload's id */
  async beginParts(key: string): Promise<string> {
    const answer = await this.ask('POST', key, { query: { uploads: '' } });
    const { InitiateMultipartUploadResult } = xml.parse(await answer.text()) as {
      InitiateMultipartUploadResult: { UploadId: string };
    };
    return InitiateMultipartUploadResult.UploadId;
  }

  /** Sends a part; the same number sent again replaces the one before. All but the last have 5 MiB at least. */
  async sendPart(key: string, uploadId: string, number: number, body: Uint8Array): Promise<StoredPart> {
    const md5 = createHash('md5').update(body).digest('base64');
    const query = { partNumber: String(number), uploadId };
    const answer = await this.ask('PUT', key, { query, body, headers: { 'content-md5': md5 } });
    await drained(answer);
    return { number, etag: answer.headers.get('etag') ?? '' };
  }

  async endParts(key: string, uploadId: string, parts: readonly StoredPart[]): Promise<void> {
    const list = parts.map(
      ({ number, etag }) => `<Part><PartNumber>${number}</PartNumber><ETag>${escaped(etag)}</ETag></Part>`,
    );
    const body = Buffer.from(`<CompleteMultipartUpload>${list.join('')}</CompleteMultipartUpload>`);
    const text = await (await this.ask('POST', key, { query: { uploadId }, body })).text();
    // "The response is 200 OK even though the operation failed": the error then stands in the body.
    const { Error: failed } = xml.parse(text) as { Error?: { Code: string } };
    if (failed) throw new S3Error(200, failed.Code, `complete ${key}`);
  }

  async dropParts(key: string, uploadId: string): Promise<void> {
    await drained(await this.ask('DELETE', key, { query: { uploadId } }));
  }

  private urlOf(key: string | null, query: Record<string, string> = {}): URL {
    const { endpoint, bucket, prefix } = this.place;
    const path = key === null ? '' : `/${(prefix + key).split('/').map(encodePart).join('/')}`;
    const url = new URL(`${endpoint}/${bucket}${path}`);
    for (const [name, value] of Object.entries(query)) url.searchParams.set(name, value);
    return url;
  }

  private async ask(method: string, key: string | null, ask: Ask): Promise<Response> {
    const { query, headers = {}, body, signal } = ask;
    const url = this.urlOf(key, query);
    for (let tried = 1; ; tried++) {
      const last = tried === TRIES;
      try {
        const payload = body
          ? sha256Hex(body)
          : method === 'GET' || method === 'HEAD'
            ? UNSIGNED
            : sha256Hex('');
        const signed = signedHeaders(this.place, { method, url, headers, payload, now: new Date() });
        const init: RequestInit = { method, headers: signed, body: body as BodyInit | undefined, signal };
        const answer = await fetch(url, init);
        if (answer.ok) return answer;
        const refusal = await refusalOf(answer, `${method} ${key ?? 'list'}`);
        if (last || !isPassing(refusal)) throw refusal;
      } catch (cause) {
        if (last || signal?.aborted || (cause instanceof S3Error && !isPassing(cause))) throw cause;
      }
      await pause(AGAIN_MS * 2 ** (tried - 1));
    }
  }
}

interface ListDocument {
  ListBucketResult: {
    Contents?: { Key: string; Size: string }[];
    IsTruncated: string;
    NextContinuationToken?: string;
  };
}

const isPassing = ({ status, code }: S3Error): boolean =>
  status >= 500 || status === 429 || code === 'RequestTimeout' || code === 'SlowDown';

async function refusalOf(answer: Response, what: string): Promise<S3Error> {
  const text = await answer.text().catch(() => '');
  const { Error: document } = xml.parse(text) as { Error?: { Code?: string } };
  const usual = answer.status === 404 ? 'NoSuchKey' : 'Unknown';
  return new S3Error(answer.status, document?.Code ?? usual, what);
}

/** A body that nobody reads holds its connection. */
const drained = (answer: Response): Promise<unknown> => answer.arrayBuffer();

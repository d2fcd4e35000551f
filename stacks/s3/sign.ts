import { createHash, createHmac } from 'node:crypto';

/** Who asks, and in which region; any region does for most stores that are not Amazon's own. */
export interface S3Credentials {
  accessKeyId: string;
  secretAccessKey: string;
  region: string;
}

export const UNSIGNED = 'UNSIGNED-PAYLOAD';
const ALGORITHM = 'AWS4-HMAC-SHA256';

export const sha256Hex = (data: string | Uint8Array): string =>
  createHash('sha256').update(data).digest('hex');
const hmac = (key: string | Buffer, text: string): Buffer => createHmac('sha256', key).update(text).digest();

/** As the signature wants it: all but letters, digits and `-._~` by their bytes. */
export const encodePart = (text: string): string =>
  encodeURIComponent(text).replace(/[!'()*]/g, (sign) => `%${sign.charCodeAt(0).toString(16).toUpperCase()}`);

/** `20130524T000000Z` */
const stampOf = (now: Date): string => now.toISOString().replace(/[-:]|\.\d{3}/g, '');

const queryOf = (url: URL): string =>
  [...url.searchParams]
    .map(([name, value]) => [encodePart(name), encodePart(value)])
    .sort(([a, x], [b, y]) => (a === b ? (x < y ? -1 : 1) : a < b ? -1 : 1))
    .map(([name, value]) => `${name}=${value}`)
    .join('&');

function signature(
  credentials: S3Credentials,
  stamp: string,
  request: { method: string; url: URL; headers: [string, string][]; payload: string },
): string {
  const { method, url, headers, payload } = request;
  const names = headers.map(([name]) => name).join(';');
  const lines = headers.map(([name, value]) => `${name}:${value.trim()}\n`).join('');
  const canonical = [method, url.pathname, queryOf(url), lines, names, payload].join('\n');
  const scope = scopeOf(credentials, stamp);
  const text = [ALGORITHM, stamp, scope, sha256Hex(canonical)].join('\n');
  const day = hmac(`AWS4${credentials.secretAccessKey}`, stamp.slice(0, 8));
  return hmac(hmac(hmac(hmac(day, credentials.region), 's3'), 'aws4_request'), text).toString('hex');
}

const scopeOf = ({ region }: S3Credentials, stamp: string): string =>
  `${stamp.slice(0, 8)}/${region}/s3/aws4_request`;

/**
 * Headers of a request with its signature (AWS Signature Version 4, as the S3 documentation describes it for the
 * `Authorization` header).
 * @param headers that are signed beside `host` and those of the date and the payload
 * @param payload SHA-256 of the body, or `UNSIGNED`
 */
export function signedHeaders(
  credentials: S3Credentials,
  { method, url, headers = {}, payload, now }: SignedRequest,
): Record<string, string> {
  const stamp = stampOf(now);
  const all = { ...headers, host: url.host, 'x-amz-content-sha256': payload, 'x-amz-date': stamp };
  const sorted = Object.entries(all)
    .map(([name, value]): [string, string] => [name.toLowerCase(), value])
    .sort(([a], [b]) => (a < b ? -1 : 1));
  const signed = signature(credentials, stamp, { method, url, headers: sorted, payload });
  const names = sorted.map(([name]) => name).join(';');
  const credential = `${credentials.accessKeyId}/${scopeOf(credentials, stamp)}`;
  return {
    ...Object.fromEntries(sorted.filter(([name]) => name !== 'host')),
    authorization: `${ALGORITHM} Credential=${credential},SignedHeaders=${names},Signature=${signed}`,
  };
}

export interface SignedRequest {
  method: string;
  url: URL;
  headers?: Record<string, string>;
  payload: string;
  now: Date;
}

/**
 * An address that lets whoever holds it read one object for a while, and nothing else (query parameters of
 * Signature Version 4).
 */
export function signedUrl(credentials: S3Credentials, url: URL, seconds: number, now: Date): string {
  const stamp = stampOf(now);
  const signed = new URL(url);
  const parameters = {
    'X-Amz-Algorithm': ALGORITHM,
    'X-Amz-Credential': `${credentials.accessKeyId}/${scopeOf(credentials, stamp)}`,
    'X-Amz-Date': stamp,
    'X-Amz-Expires': String(seconds),
    'X-Amz-SignedHeaders': 'host',
  };
  for (const [name, value] of Object.entries(parameters)) signed.searchParams.set(name, value);
  const headers: [string, string][] = [['host', signed.host]];
  const made = signature(credentials, stamp, { method: 'GET', url: signed, headers, payload: UNSIGNED });
  signed.searchParams.set('X-Amz-Signature', made);
  return signed.href;
}

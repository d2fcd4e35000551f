import { LabError } from '@/lib/errors';

const SAFE_METHODS = new Set(['GET', 'HEAD', 'OPTIONS']);
/** What a page of another site can't send without asking first. */
const BODY_TYPES = new Set(['application/json', 'application/offset+octet-stream']);

export const contentTypeOf = (headers: Headers): string =>
  (headers.get('content-type') ?? '').split(';')[0].trim().toLowerCase();

/**
 * A request that changes something and rides on a cookie must come from our own pages: the browser
 * says so by `Sec-Fetch-Site`, or by an `Origin` of the host that it asked.
 * @throws LabError CROSS_SITE or CONTENT_TYPE.
 */
export function assertOwnSite(request: Request): void {
  if (SAFE_METHODS.has(request.method)) return;
  const site = request.headers.get('sec-fetch-site');
  const origin = request.headers.get('origin');
  const own = site !== null ? site === 'same-origin' : origin !== null && isOwnOrigin(origin, request);
  if (!own) {
    throw new LabError('CROSS_SITE', 'Changes are accepted from the pages of this site only.');
  }
  const type = contentTypeOf(request.headers);
  if (type !== '' && !BODY_TYPES.has(type)) {
    throw new LabError('CONTENT_TYPE', `Send JSON (application/json), not '${type.slice(0, 60)}'.`);
  }
}

function isOwnOrigin(origin: string, request: Request): boolean {
  const host = request.headers.get('host') ?? new URL(request.url).host;
  return URL.canParse(origin) && new URL(origin).host === host;
}

import { LabError } from '@/lib/errors';
import { contentTypeOf } from './csrf';

/** The largest sensible body is a few kB; uploads have a way of their own. */
const BODY_BYTES_MAX = 1_000_000;
const DEPTH_MAX = 32;

/**
 * The JSON of a request's body, undefined where there is none.
 * @throws LabError TOO_LARGE, CONTENT_TYPE, or BAD_JSON (not JSON, nested too deep, or with a key
 *   that would reach an object's prototype).
 */
export async function readJson(request: Request): Promise<{ value: unknown; text: string }> {
  const text = await readText(request);
  if (text === '') return { value: undefined, text };
  if (contentTypeOf(request.headers) !== 'application/json') {
    throw new LabError('CONTENT_TYPE', 'Send JSON with Content-Type application/json.');
  }
  let value: unknown;
  try {
    value = JSON.parse(text);
  } catch (cause) {
    throw new LabError('BAD_JSON', 'The body is not JSON.', { cause });
  }
  checkShape(value);
  return { value, text };
}

async function readText(request: Request): Promise<string> {
  const tooLarge = () => new LabError('TOO_LARGE', `At most ${BODY_BYTES_MAX / 1e6} MB of JSON.`);
  if (Number(request.headers.get('content-length') ?? 0) > BODY_BYTES_MAX) throw tooLarge();
  if (!request.body) return '';
  const pieces: Uint8Array[] = [];
  let bytes = 0;
  for await (const piece of request.body as unknown as AsyncIterable<Uint8Array>) {
    bytes += piece.length;
    if (bytes > BODY_BYTES_MAX) throw tooLarge();
    pieces.push(piece);
  }
  return Buffer.concat(pieces).toString('utf8');
}

function checkShape(root: unknown): void {
  let level: unknown[] = [root];
  for (let depth = 0; level.length > 0; depth++) {
    if (depth > DEPTH_MAX) throw new LabError('BAD_JSON', `The body is nested more than ${DEPTH_MAX} deep.`);
    const next: unknown[] = [];
    for (const item of level) {
      if (typeof item !== 'object' || item === null) continue;
      if (Object.hasOwn(item, '__proto__')) {
        throw new LabError('BAD_JSON', "The body has a key that is not accepted: '__proto__'.");
      }
      for (const value of Object.values(item)) if (typeof value === 'object') next.push(value);
    }
    level = next;
  }
}

import { z } from 'zod';
import { LabError } from '../errors';
import { NAME_LENGTH_MAX } from '../schemas/text';

const invalid = (cause?: unknown) => new LabError('BAD_METADATA', 'Upload-Metadata is invalid.', { cause });

const HEADER_MAX = 8_192;
const KEY = /^[^\s,]{1,100}$/;
const BASE64 = /^(?:[A-Za-z0-9+/]{4})*(?:[A-Za-z0-9+/]{2}==|[A-Za-z0-9+/]{3}=)?$/;
// Line ends inside a value would end up in headers and logs.
const CONTROL_MARKS = /[\u0000-\u001f\u007f]/;

/**
 * The pairs of `Upload-Metadata` (tus 1.0.0, creation): "comma-separated key-value pairs", the key
 * "MUST NOT contain spaces and commas and MUST NOT be empty", unique, the value Base64.
 * @throws LabError BAD_METADATA, TOO_LARGE
 */
export function parseUploadMetadata(header: string | null): Record<string, string> {
  const pairs: [string, string][] = [];
  if (header === null || header.trim() === '') return {};
  if (header.length > HEADER_MAX)
    throw new LabError('TOO_LARGE', `Upload-Metadata has at most ${HEADER_MAX} characters.`);
  for (const pair of header.split(',')) {
    const [key, value = '', ...rest] = pair.split(' ');
    if (!KEY.test(key) || rest.length > 0 || !BASE64.test(value)) throw invalid();
    if (pairs.some(([known]) => known === key)) throw invalid();
    pairs.push([key, decode(value)]);
  }
  return Object.fromEntries(pairs);
}

function decode(base64: string): string {
  let text: string;
  try {
    text = new TextDecoder('utf-8', { fatal: true }).decode(Buffer.from(base64, 'base64'));
  } catch (cause) {
    throw invalid(cause);
  }
  if (CONTROL_MARKS.test(text)) throw invalid();
  return text;
}

const metadataSchema = z.object({
  filename: z.string().transform(baseName).pipe(z.string().min(1).max(NAME_LENGTH_MAX)),
  run: z.string(),
  sha256: z
    .string()
    .regex(/^[0-9a-f]{64}$/i)
    .transform((hex) => hex.toLowerCase())
    .optional(),
  folder: z.string().optional(),
  position: z
    .string()
    .regex(/^\d{1,7}$/)
    .transform(Number)
    .optional(),
});
export type UploadMetadata = z.output<typeof metadataSchema>;

/** What we need of the metadata; other keys are kept but mean nothing to us. @throws LabError BAD_METADATA */
export function uploadMetadata(header: string | null): UploadMetadata {
  const parsed = metadataSchema.safeParse(parseUploadMetadata(header));
  if (!parsed.success) {
    const errors = parsed.error.issues.map(({ path, message }) => ({
      path: path.map(String).join('.'),
      message,
    }));
    throw new LabError('BAD_METADATA', `Upload-Metadata is invalid: ${errors[0].path}.`, { errors });
  }
  const { folder, position } = parsed.data;
  if ((folder === undefined) !== (position === undefined)) {
    throw new LabError('BAD_METADATA', 'Upload-Metadata is invalid: folder and position belong together.');
  }
  return parsed.data;
}

/** The last part of a path, without marks that turn or hide what is read. */
function baseName(path: string): string {
  const name = path.split(/[\\/]/).at(-1) ?? '';
  return name.replace(/[\u200b-\u200f\u202a-\u202e\u2060-\u2069\ufeff]/g, '').trim();
}

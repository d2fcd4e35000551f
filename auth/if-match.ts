import { LabError } from '@/lib/errors';

/**
 * The revisions that `If-Match` accepts (RFC 9110, 13.1.1); null for `*`, any.
 * @throws LabError PRECONDITION_REQUIRED when the header is missing or not an entity tag of ours.
 */
export function readIfMatch(header: string | null): number[] | null {
  if (header?.trim() === '*') return null;
  const tags = (header ?? '').split(',').map((tag) => /^(?:W\/)?"(\d{1,9})"$/.exec(tag.trim())?.[1]);
  if (tags.length === 0 || tags.some((tag) => tag === undefined)) {
    throw new LabError(
      'PRECONDITION_REQUIRED',
      'Send If-Match with the revision you have read, as in If-Match: "3".',
    );
  }
  return tags.map(Number);
}
